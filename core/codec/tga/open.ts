import { refuse } from '../../problem.ts';
import type { ImageSource } from '../source.ts';
import { checkTrailer } from './footer.ts';
import { tgaForm } from './form.ts';
import { byteCount, readTgaHeader } from './header.ts';
import { readRows } from './rows.ts';
import { findRows } from './rowstarts.ts';
import { readColorMap } from './texel.ts';

/** A TGA whose header, length and packets have been checked: types 1, 2, 3 and their run-length forms 9, 10, 11. Rows come
 *  from the top and left whatever the origin. `bytes` is viewed, not copied, and must not change. Throws Refusal, without
 *  a path. */
export function openTga(bytes: Uint8Array): ImageSource {
  const header = readTgaHeader(bytes);
  if (header.dataOffset > bytes.length) {
    refuse('tga-truncated', { part: 'color map', found: bytes.length, expected: header.dataOffset });
  }
  const palette = header.map === null ? null : readColorMap(bytes, header.map, header.alpha);
  const starts = findRows(bytes, header);
  const trailingBytes = checkTrailer(bytes, starts.end);
  const { extent, channels, indexed, rowChannels } = tgaForm(header);
  const alphaCount = channels === 4 ? header.map?.length : 0;
  return {
    header: {
      format: 'tga',
      extent,
      channels,
      depth: 8,
      indexed: indexed ? { indexBits: 8, palette: palette!, alphaCount: alphaCount ?? 0 } : null,
      interlaced: false,
      colorChunks: [],
      trailingBytes,
    },
    decodeBytes: starts.offsets.byteLength + starts.skips.byteLength + extent.width * byteCount(header.texelBits),
    rows: () => readRows({ bytes, header, palette, starts, rowChannels }),
  };
}
