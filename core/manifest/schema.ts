import type { Manifest, ManifestFile, ManifestImage, ManifestSource } from './manifest.ts';
import { treatmentShape } from './settings.ts';
import { choice, flag, integer, list, object, optional, pair, type Shape, statistic, text } from './shape.ts';

const sha256 = text(/^[0-9a-f]{64}$/, 'a SHA-256 in 64 lower-case hexadecimal digits');

/** "/"-separated and relative, whatever the system: no drive, no root, no backslash. `..` may lead up to a source. */
const relativePath = text(/^(?![a-zA-Z]:)(?!\/)[^\\\p{Cc}]{1,4096}$/u, 'a relative path with "/" between its parts');

const extent = pair(integer(1, 16384));

const words = text(/^\P{Cc}{0,4096}$/u, 'a text of at most 4096 characters');

const file: Shape<ManifestFile> = object<ManifestFile>({ path: relativePath, sha256 });

const source: Shape<ManifestSource> = object<ManifestSource>({
  path: relativePath,
  use: choice('image', 'roughness'),
  sha256,
  pixels: sha256,
  extent,
  depth: choice(8, 16),
  channels: choice(1, 2, 3, 4),
  colorChunks: list(words),
});

const sampleCounts = list(integer(0, 16384 * 16384));

const image: Shape<ManifestImage> = object<ManifestImage>({
  use: choice('image', 'min', 'max', 'roughness'),
  level: optional(integer(0, 14)),
  target: optional(words),
  extent,
  pixels: sha256,
  file: optional(file),
  coverage: optional(statistic(0, 1)),
  coverageScale: optional(
    object<NonNullable<ManifestImage['coverageScale']>>({
      scale: statistic(0, 16),
      residual: statistic(-1, 1),
      tie: flag,
    }),
  ),
  luminance: optional(statistic(0, 1)),
  normalLength: optional(statistic(0, 1)),
  clipped: optional(object<NonNullable<ManifestImage['clipped']>>({ below: sampleCounts, above: sampleCounts })),
});

/** A whole manifest of this format, keys in the order that is written. */
export const manifestShape: Shape<Manifest> = object<Manifest>({
  format: integer(1, Number.MAX_SAFE_INTEGER),
  algorithm: integer(1, Number.MAX_SAFE_INTEGER),
  encoder: sha256,
  base: optional(choice('root')),
  sources: list(source),
  settings: treatmentShape,
  levels: list(image),
  targets: list(image),
  containers: list(file),
  notes: list(words),
});
