import { refuse } from '../../problem.ts';

/** Checks what follows the image data and gives its length in bytes. A TGA 2.0 footer at the very end accounts for all of
 *  it (developer and extension areas); without one anything there is refused, since it may be image data that the header
 *  does not promise. So is an extension area that says that colors are premultiplied.
 *  [TGA2, "TGA file footer", "Extension area"] */
export function checkTrailer(bytes: Uint8Array, dataEnd: number): number {
  const trailing = bytes.length - dataEnd;
  if (trailing === 0) return 0;
  const footer = bytes.length - FOOTER_BYTES;
  if (footer < dataEnd || !hasFooterSignature(bytes, footer + 8)) {
    refuse('tga-surplus', { found: trailing, offset: dataEnd });
  }
  const extension = new DataView(bytes.buffer, bytes.byteOffset + footer).getUint32(0, true);
  const attributes = extension + ATTRIBUTES_TYPE_OFFSET;
  if (extension >= dataEnd && attributes < footer && bytes[attributes] === PREMULTIPLIED) {
    refuse('tga-premultiplied', {});
  }
  return trailing;
}

/** Two offsets of 4 bytes, the signature of 16, a full stop and a zero. */
const FOOTER_BYTES = 26;

const SIGNATURE = 'TRUEVISION-XFILE';

/** Where the extension area holds its attributes type, and the type that means premultiplied. */
const ATTRIBUTES_TYPE_OFFSET = 494;
const PREMULTIPLIED = 4;

function hasFooterSignature(bytes: Uint8Array, offset: number): boolean {
  return String.fromCharCode(...bytes.subarray(offset, offset + SIGNATURE.length)) === SIGNATURE;
}
