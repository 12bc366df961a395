import type { StraightRaster } from '../../../core/raster/raster.ts';
import { type Color, hex, mixColor, ramp } from './color.ts';
import { bladeAt } from './leaf.ts';
import { clamp, smoothstep } from './shape.ts';

/** Edge in texels: what a store shows on a dense screen. */
const SIZE = 256;

/** Samples per axis of a texel. */
const SAMPLES = 4;

/** Prints on the axis: each half as large as the one before, in texels of the icon. */
const PRINTS = [104, 52, 26, 13, 6] as const;
const GAP = 5;
const LEFT = 18;
const AXIS = 172;

const night = ramp('#16292b', '#21413f');
const paper: Color = hex('#efe6d2');
const blade = ramp('#1f4a2c', '#3f7d3a', '#8fb34a', '#d7dd86');
const line: Color = hex('#c9d6c8');
const sight: Color = hex('#e8a13a');

/** The extension's icon: prints of one leaf on the size axis, and the sight under one of them. */
export function paintIcon(): StraightRaster {
  const codes = new Uint8Array(SIZE * SIZE * 4);
  for (let y = 0; y < SIZE; y++) {
    for (let x = 0; x < SIZE; x++) codes.set(texel(x, y), (y * SIZE + x) * 4);
  }
  return { kind: 'straight', extent: { width: SIZE, height: SIZE }, channels: 4, depth: 8, codes };
}

function texel(x: number, y: number): [number, number, number, number] {
  const sum = [0, 0, 0, 0];
  for (let sample = 0; sample < SAMPLES * SAMPLES; sample++) {
    const u = x + ((sample % SAMPLES) + 0.5) / SAMPLES;
    const v = y + (Math.floor(sample / SAMPLES) + 0.5) / SAMPLES;
    if (outsideCard(u, v)) continue;
    const color = colorAt(u, v);
    for (let channel = 0; channel < 3; channel++) sum[channel] += color[channel];
    sum[3]++;
  }
  if (sum[3] === 0) return [0, 0, 0, 0];
  const [red, green, blue] = sum.map((each) => Math.round(each / sum[3]));
  return [red, green, blue, Math.round((sum[3] * 255) / (SAMPLES * SAMPLES))];
}

/** A square card with round corners. */
function outsideCard(u: number, v: number): boolean {
  const radius = 40;
  const dx = Math.max(radius - u, u - (SIZE - radius), 0);
  const dy = Math.max(radius - v, v - (SIZE - radius), 0);
  return dx * dx + dy * dy > radius * radius;
}

function colorAt(u: number, v: number): Color {
  let left = LEFT;
  for (const [at, edge] of PRINTS.entries()) {
    const [across, down] = [(u - left) / edge, (v - (AXIS - 8 - edge)) / edge];
    if (across >= 0 && across < 1 && down >= 0 && down < 1) return printAt(across, down, at);
    left += edge + GAP;
  }
  if (Math.abs(v - AXIS) < 2 && u > LEFT && u < SIZE - LEFT) return line;
  const middle = LEFT + PRINTS[0] + PRINTS[1] + 2 * GAP + PRINTS[2] / 2;
  const below = v - (AXIS + 8);
  if (below >= 0 && below < 22 && Math.abs(u - middle) < below * 0.7) return sight;
  return night(1 - v / SIZE);
}

/** The leaf as the print of a level shows it: in texels of its own, each twice as large a part of it as one level before. */
function printAt(across: number, down: number, level: number): Color {
  const texels = Math.max(1, Math.floor(26 / 2 ** level));
  const part = 1 / texels;
  const [x, y] = [Math.floor(across * texels) * part, Math.floor(down * texels) * part];
  let color: Color = [0, 0, 0];
  for (let sample = 0; sample < 16; sample++) {
    const at = leafAt(x + (((sample % 4) + 0.5) / 4) * part, y + ((Math.floor(sample / 4) + 0.5) / 4) * part);
    color = [color[0] + at[0] / 16, color[1] + at[1] / 16, color[2] + at[2] / 16];
  }
  return color;
}

/** A leaf that points up to the right. */
function leafAt(x: number, y: number): Color {
  const [right, up] = [x - 0.2, 0.8 - y];
  const along = (right + up) / 1.28;
  const found = bladeAt(along, (right - up) / 1.28, 11);
  if (found === null) return paper;
  const shade = blade(clamp(found.tone * 1.15));
  return mixColor(shade, blade(0), 0.5 * smoothstep(0.4, 1, found.rim));
}
