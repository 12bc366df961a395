import { openImage } from '../codec/open.ts';
import { PixelHash } from '../codec/pixels.ts';
import type { ImageSource } from '../codec/source.ts';
import type { JobSource } from '../job.ts';
import type { ManifestSource } from '../manifest/manifest.ts';
import { type Cancel, Cancelled, type Ports } from '../port.ts';
import { type Codes, expandIndexed, type IndexedRaster } from '../raster/raster.ts';
import type { SourceFacts } from './plan.ts';

/** An image file of a job, opened. */
export interface OpenedSource {
  readonly image: ImageSource;
  readonly job: JobSource;
  readonly facts: SourceFacts;
  /** An indexed file without its indices: what its rows mean. */
  readonly palette: IndexedRaster | null;
}

/** Opens an image file of a job; `path` tells its extension. Throws Refusal. */
export function openSource(path: string, job: JobSource, ports: Ports): OpenedSource {
  const image = openImage(job.bytes, path, ports.inflate, ports);
  return { image, job, facts: factsOf(image, job.bytes.length), palette: paletteOf(image) };
}

/** What planning needs to know of an opened image. */
export function factsOf(image: ImageSource, fileBytes: number): SourceFacts {
  const { extent, channels, depth, indexed, colorChunks } = image.header;
  return { extent, channels, depth, indexed: indexed !== null, colorChunks, fileBytes, decodeBytes: image.decodeBytes };
}

function paletteOf(image: ImageSource): IndexedRaster | null {
  const { extent, indexed } = image.header;
  return indexed === null ? null : { kind: 'indexed', extent, ...indexed, indices: new Uint8Array(0) };
}

/** Decodes once, hands each row to `take`, and says what the manifest will know of the source. Throws Refusal for damaged
 *  data, Cancelled when asked to stop. */
export async function readSource(
  source: OpenedSource,
  use: ManifestSource['use'],
  ports: Ports,
  cancel: Cancel,
  take: (codes: Codes) => void,
): Promise<ManifestSource> {
  const { image, job, palette } = source;
  const { extent, channels, depth, colorChunks } = image.header;
  const file = ports.newHash();
  file.update(job.bytes);
  const pixels = new PixelHash(extent, channels, depth, ports.newHash);
  for await (const { codes } of image.rows()) {
    if (cancel.cancelled) throw new Cancelled();
    pixels.update(palette === null ? codes : expandRow(palette, codes as Uint8Array));
    take(codes);
  }
  return {
    path: job.reference,
    use,
    sha256: file.hex(),
    pixels: pixels.hex(),
    extent: [extent.width, extent.height],
    depth,
    channels,
    colorChunks: colorChunks.map(({ name, value }) => `${name} ${value}`),
  };
}

function expandRow(palette: IndexedRaster, indices: Uint8Array): Codes {
  return expandIndexed({ ...palette, extent: { width: indices.length, height: 1 }, indices }).codes;
}
