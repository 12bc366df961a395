import { crc32 } from '../codec/crc.ts';
import { CHUNK_FRAME_BYTES, type Chunk, hasSignature, PNG_SIGNATURE, readChunk } from '../codec/png/chunks.ts';
import type { SourceHeader } from '../codec/source.ts';

/** One thing about a file's form that is no longer as it was; the picture may be the same all the same. */
export interface FormChange {
  readonly what:
    | 'extent'
    | 'depth'
    | 'channels'
    | 'palette'
    | 'palette order'
    | 'color chunks'
    | 'metadata'
    | 'interlacing'
    | 'format';
  /** In words; empty for none. */
  readonly before: string;
  readonly after: string;
}

/** Compares what two files promise in their headers. */
export function compareForms(before: SourceHeader, after: SourceHeader): FormChange[] {
  const changes: FormChange[] = [];
  const note = (what: FormChange['what'], of: (header: SourceHeader) => string): void => {
    const [was, is] = [of(before), of(after)];
    if (was !== is) changes.push({ what, before: was, after: is });
  };
  note('extent', ({ extent }) => `${extent.width}x${extent.height}`);
  note('depth', ({ depth }) => `${depth} bits`);
  note('channels', channelsOf);
  note('palette', ({ indexed }) => (indexed === null ? 'no palette' : `${indexed.palette.length / 4} colors`));
  if (paletteMoved(before, after)) changes.push({ what: 'palette order', before: 'a palette', after: 'another' });
  note('color chunks', ({ colorChunks }) => colorChunks.map(({ name, value }) => `${name} ${value}`).join(', '));
  note('interlacing', ({ interlaced }) => (interlaced ? 'interlaced' : 'not interlaced'));
  note('format', ({ format }) => format.toUpperCase());
  return changes;
}

/** `RGB`, `RGBA`, `gray`, `gray and alpha`. */
export function channelsOf({ channels }: Pick<SourceHeader, 'channels'>): string {
  return ['gray', 'gray and alpha', 'RGB', 'RGBA'][channels - 1];
}

/** Names of the chunks of a PNG that no picture needs and no color follows, with a CRC of each: text, times, physical size.
 *  Empty for other formats. The file has been opened, so its chunks are whole. */
export function metadataOf(bytes: Uint8Array): readonly string[] {
  if (!hasSignature(bytes)) return [];
  const found: string[] = [];
  let offset = PNG_SIGNATURE.length;
  for (let chunk = readChunk(bytes, offset); chunk !== null; chunk = readChunk(bytes, offset)) {
    if (!PICTURE_CHUNKS.has(chunk.name)) found.push(`${chunk.name} ${crc32(chunk.body).toString(16)}`);
    offset += CHUNK_FRAME_BYTES + chunk.body.length;
    if (chunk.name === 'IEND') break;
  }
  return found.sort();
}

/** Whether the compressed image data of two PNG files is the same, byte for byte. */
export function sameImageData(before: Uint8Array, after: Uint8Array): boolean {
  const [one, other] = [imageData(before), imageData(after)];
  return one !== null && other !== null && one.crc === other.crc && one.length === other.length;
}

/** The difference of two files' metadata, or null. */
export function compareMetadata(before: Uint8Array, after: Uint8Array): FormChange | null {
  const [was, is] = [metadataOf(before), metadataOf(after)];
  if (was.join() === is.join()) return null;
  const names = (chunks: readonly string[]): string =>
    [...new Set(chunks.map((each) => each.split(' ')[0]))].join(', ');
  return { what: 'metadata', before: names(was), after: names(is) };
}

/** Chunks that hold the picture, or that `compareForms` tells of. */
const PICTURE_CHUNKS = new Set(['IHDR', 'PLTE', 'tRNS', 'IDAT', 'IEND', 'cICP', 'iCCP', 'sRGB', 'gAMA', 'cHRM']);

function imageData(bytes: Uint8Array): { readonly crc: number; readonly length: number } | null {
  if (!hasSignature(bytes)) return null;
  let [crc, length, offset] = [0, 0, PNG_SIGNATURE.length];
  let chunk: Chunk | null = readChunk(bytes, offset);
  for (; chunk !== null && chunk.name !== 'IEND'; chunk = readChunk(bytes, offset)) {
    if (chunk.name === 'IDAT') {
      crc = crc32(chunk.body, crc);
      length += chunk.body.length;
    }
    offset += CHUNK_FRAME_BYTES + chunk.body.length;
  }
  return { crc, length };
}

function paletteMoved(before: SourceHeader, after: SourceHeader): boolean {
  const [one, other] = [before.indexed?.palette, after.indexed?.palette];
  if (one === undefined || other === undefined || one.length !== other.length) return false;
  return one.some((code, at) => code !== other[at]);
}
