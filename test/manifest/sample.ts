import { createHash } from 'node:crypto';
import { ALGORITHM, MANIFEST_FORMAT, type Manifest } from '../../core/manifest/manifest.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';

export const sha256 = (bytes: Uint8Array | string) => createHash('sha256').update(bytes).digest('hex');

export const sampleTreatment: Treatment = {
  content: 'color',
  channels: null,
  transfer: 'srgb',
  light: 'linear',
  alpha: { use: 'mask', cutoff: 0.5, test: '>=', keepCoverage: true, store: 'straight', weight: true },
  fill: 'hidden',
  kernel: {
    minify: { name: 'kaiser', params: { alpha: 4, width: 3 } },
    magnify: { name: 'mitchell', params: { b: 1 / 3, c: 1 / 3 } },
  },
  derive: 'previous',
  wrap: { x: 'clamp-to-edge', y: 'repeat' },
  levels: { first: 0, last: null },
  targets: [
    { name: '2x', scale: 2 },
    { name: 'icon', extent: [48, 32] },
    { name: '48x48', cell: [48, 48] },
  ],
  grid: { cell: [16, 16], gutter: 1 },
  depth: 'same',
  outputs: ['png', 'ktx2'],
  name: null,
  ktx2: { supercompress: 'none', format: 'wide' },
  normal: { count: 3, y: 'up', base: 'keep', roughness: { path: '{path}/{name}_rough.png', channel: 'r' } },
  height: { minmax: false },
  png: { base: false },
  colorChunks: 'ignore',
  view: { texelsPerMeter: 512, fovY: 60, screenHeight: 1080, blend: 'linear' },
  limits: { thinning: 0.25, halo: null, overBudget: { bytes: 5_000_000, format: 'BC7' } },
};

/** A manifest of one image whose outputs are these files, by name. */
export function sampleManifest(files: Readonly<Record<string, Uint8Array | string>> = {}): Manifest {
  const names = Object.keys(files);
  return {
    format: MANIFEST_FORMAT,
    algorithm: ALGORITHM,
    encoder: sha256('encoder'),
    sources: [
      {
        path: '../leaf.png',
        use: 'image',
        sha256: sha256('source'),
        pixels: sha256('source pixels'),
        extent: [16, 8],
        depth: 8,
        channels: 4,
        colorChunks: ['sRGB 0'],
      },
    ],
    settings: sampleTreatment,
    levels: names.map((name, level) => ({
      use: 'image',
      level,
      extent: [Math.max(1, 16 >> level), Math.max(1, 8 >> level)],
      pixels: sha256(`pixels of ${name}`),
      file: { path: name, sha256: sha256(files[name]) },
      coverage: 0.312345,
      coverageScale: { scale: 1.25, residual: -0.00123457, tie: false },
      luminance: 0.215861,
      clipped: { below: [0, 1, 2], above: [3, 0, 0] },
    })),
    targets: [],
    containers: [],
    notes: ['Level 0 is not written: it holds the codes of the source.'],
  };
}
