import type { ChainImage } from '../chain/image.ts';
import { encoderFingerprint } from '../codec/encoder.ts';
import { type LaidFile, layKtx2 } from '../codec/ktx2/encode.ts';
import { hashPixels } from '../codec/pixels.ts';
import { encodePng } from '../codec/png/encode.ts';
import type { BuildTexture, BuiltFile } from '../job.ts';
import {
  ALGORITHM,
  MANIFEST_FORMAT,
  type ManifestFile,
  type ManifestImage,
  type ManifestSource,
} from '../manifest/manifest.ts';
import { type Cancel, Cancelled, type Ports } from '../port.ts';
import { refuse } from '../problem.ts';
import { expandIndexed, type Raster } from '../raster/raster.ts';
import { plainEngine } from '../resample/plain.ts';
import { manifestPath } from '../treatment/find/names.ts';
import { type BuiltChains, buildChains } from './chains.ts';
import { describeImage } from './describe.ts';
import { containerLayout, type PlannedContainer, type PlannedImage } from './outputs.ts';
import { peakOf, planBuild, type TexturePlan } from './plan.ts';
import { buildRoughness } from './roughness.ts';
import { openSource, readSource } from './source.ts';

/** Builds one texture: decode, chain, encode. What every door calls. */
export const buildTexture: BuildTexture = async (job, ports, cancel, write) => {
  const source = openSource(job.texture, job.image, ports);
  const { engine = plainEngine } = ports;
  const plan = planBuild(job.texture, source.facts, job.treatment, engine);
  const bytes = peakOf(source.facts, plan) + (job.roughness?.bytes.length ?? 0);
  if (bytes > job.memoryBytes) refuse('too-much-memory', { bytes, limit: job.memoryBytes });

  // Where the platform deflates on a thread of its own, this goes on beside the chain.
  const encoder = encoderFingerprint(ports);
  // It is awaited in the end; until then a failure is nobody's.
  encoder.catch(() => undefined);
  const chains = await buildChains(source, plan, engine, (take) => readSource(source, 'image', ports, cancel, take));
  const roughness = await buildRoughness(job, plan, chains.coded, ports, cancel);
  const sources = roughness?.source ? [chains.source, roughness.source] : [chains.source];

  const work: Emission = { plan, chains, sources, folder: folderOf(manifestPath(job.texture)), ports, cancel, write };
  const images: ManifestImage[] = [];
  for (const planned of plan.outputs.images) {
    const { base } = chains.coded;
    if (base !== null && planned.use === 'image' && planned.level === 0) {
      images.push(describeImage(planned, base, chains.source.pixels, null));
      continue;
    }
    const from = planned.use === 'roughness' ? roughness!.chain.images : chains.coded.images;
    images.push(await emitImage(work, planned, findImage(from, planned)));
  }
  const containers: ManifestFile[] = [];
  for (const planned of plan.outputs.containers) {
    const from = planned.use === 'roughness' ? roughness!.chain.images : null;
    containers.push(await emitContainer(work, planned, from));
  }
  if (cancel.cancelled) throw new Cancelled();
  return {
    format: MANIFEST_FORMAT,
    algorithm: ALGORITHM,
    encoder: await encoder,
    sources,
    settings: job.treatment,
    levels: images.filter((image) => image.level !== undefined),
    targets: images.filter((image) => image.target !== undefined),
    containers,
    notes: plan.notes,
  };
};

interface Emission {
  readonly plan: TexturePlan;
  readonly chains: BuiltChains;
  readonly sources: readonly ManifestSource[];
  /** The manifest's folder below the output folder, "" for itself. */
  readonly folder: string;
  readonly ports: Ports;
  readonly cancel: Cancel;
  readonly write: (file: BuiltFile) => Promise<void>;
}

async function emitImage(work: Emission, planned: PlannedImage, image: ChainImage): Promise<ManifestImage> {
  const { ports, sources, plan } = work;
  const pixels = hashPixels(image.raster, ports.newHash);
  // A level 0 whose codes are the source's needs no second file.
  const source = sources.find(({ use }) => use === planned.use);
  const same = planned.level === 0 && pixels === source?.pixels;
  const wanted = planned.png !== null && (!same || plan.chain.treatment.png.base);
  const file = wanted ? await emitPng(work, planned.png!, image.raster) : null;
  return describeImage(planned, image, pixels, file);
}

async function emitPng(work: Emission, path: string, raster: Raster): Promise<ManifestFile> {
  const bytes = await encodePng(pngRaster(raster), work.ports.deflate, work.ports);
  return emitFile(work, path, { byteCount: bytes.length, pieces: [bytes] });
}

async function emitContainer(
  work: Emission,
  planned: PlannedContainer,
  own: readonly ChainImage[] | null,
): Promise<ManifestFile> {
  const { chains, plan, ports } = work;
  const coded = own ?? chains.coded.images;
  const [first] = planned.levels;
  const { raster } = findImage(coded, { use: planned.use, level: first });
  const form = raster.kind === 'indexed' ? expandIndexed(raster) : raster;
  const layout = containerLayout(plan.chain, planned.use, form.channels, form.depth);
  const from = layout.holds === 'linear-light' && own === null ? chains.linear!.images : coded;
  const levels = planned.levels.map((level) => {
    const found = findImage(from, { use: planned.use, level }).raster;
    return found.kind === 'indexed' ? expandIndexed(found) : found;
  });
  const { supercompress } = plan.chain.treatment.ktx2;
  return emitFile(work, planned.path, await layKtx2(levels, layout, { supercompress }, ports.deflate));
}

async function emitFile(work: Emission, path: string, { byteCount, pieces }: LaidFile): Promise<ManifestFile> {
  const { cancel, folder, ports, write } = work;
  if (cancel.cancelled) throw new Cancelled();
  const hash = ports.newHash();
  let handed = 0;
  const hashed = (async function* () {
    for (const piece of pieces) {
      if (cancel.cancelled) throw new Cancelled();
      hash.update(piece);
      handed += piece.length;
      yield piece;
    }
  })();
  await write({ path, byteCount, pieces: hashed });
  // Whoever took none of them has the hash all the same.
  for await (const _ of hashed);
  if (handed !== byteCount) throw new RangeError(`Expected ${byteCount} bytes to be taken but ${handed} were`);
  return { path: relativeTo(folder, path), sha256: hash.hex() };
}

function findImage(images: readonly ChainImage[], wanted: Pick<PlannedImage, 'use' | 'level' | 'target'>): ChainImage {
  const found = images.find(
    (image) =>
      (image.use === wanted.use || wanted.use === 'roughness') &&
      image.level === wanted.level &&
      image.target === wanted.target,
  );
  if (found === undefined) throw new RangeError(`Expected an image for ${JSON.stringify(wanted)} but there is none`);
  return found;
}

/** PNG holds straight codes; settings refuse premultiplied ones before this. */
function pngRaster(raster: Raster): Exclude<Raster, { kind: 'premultiplied' }> {
  if (raster.kind === 'premultiplied')
    throw new TypeError('Expected a straight raster for PNG but received a premultiplied one');
  return raster;
}

function folderOf(path: string): string {
  return path.slice(0, Math.max(0, path.lastIndexOf('/')));
}

/** A path below the output folder, seen from a folder below it. */
export function relativeTo(folder: string, path: string): string {
  const from = folder === '' ? [] : folder.split('/');
  const to = path.split('/');
  let shared = 0;
  while (shared < from.length && shared < to.length - 1 && from[shared] === to[shared]) shared++;
  return [...from.slice(shared).map(() => '..'), ...to.slice(shared)].join('/');
}
