import type { Inflate, PngTools } from '../port.ts';
import { refuse } from '../problem.ts';
import { hasSignature } from './png/chunks.ts';
import { openPng } from './png/open.ts';
import { refusePointer } from './pointer.ts';
import type { ImageSource } from './source.ts';
import { openTga } from './tga/open.ts';

/** Extensions of files that are looked at as images, in lower case; any case is meant. */
export const IMAGE_EXTENSIONS = ['.png', '.tga'] as const;

export type ImageExtension = (typeof IMAGE_EXTENSIONS)[number];

/** Opens an image file: PNG by its signature whatever its name, TGA by its extension, since it has no signature. `path`
 *  tells the extension and is not put into problems. Throws Refusal. */
export function openImage(bytes: Uint8Array, path: string, inflate: Inflate, tools?: PngTools): ImageSource {
  return formatOf(bytes, path) === 'png' ? openPng(bytes, inflate, tools) : openTga(bytes);
}

/** Which reader a file is for, from its head and name. Refuses Git LFS pointers and files of another kind. */
export function formatOf(head: Uint8Array, path: string): 'png' | 'tga' {
  if (head.length === 0) refuse('file-empty', {});
  if (hasSignature(head)) return 'png';
  refusePointer(head);
  const extension = extensionOf(path);
  switch (imageExtension(path)) {
    case '.png':
      return 'png';
    case '.tga':
      return 'tga';
    case null:
      return refuse('unknown-format', { extension: extension || '(none)', known: IMAGE_EXTENSIONS.join(', ') });
  }
}

/** The known extension that a path ends with, in lower case, or null. */
export function imageExtension(path: string): ImageExtension | null {
  const extension = extensionOf(path).toLowerCase();
  return IMAGE_EXTENSIONS.find((known) => known === extension) ?? null;
}

/** From the last dot of the file's name on; empty where it has none. */
function extensionOf(path: string): string {
  const name = path.slice(path.lastIndexOf('/') + 1);
  const dot = name.lastIndexOf('.');
  return dot < 0 ? '' : name.slice(dot);
}
