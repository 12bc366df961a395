import type { StraightRaster } from '../../../core/raster/raster.ts';
import { type Color, hex, mixColor, ramp } from './color.ts';
import { clamp, mix, smoothstep, toSegment } from './shape.ts';

const SIZE = 64;

/** Samples a texel on each axis. */
const GRID = 4;

const iron = ramp('#171a2a', '#2b3150', '#4a5480', '#7c8ab2', '#c3cfe6');
const glass = ramp('#b0451c', '#e88a2c', '#ffc95a', '#fff0b0', '#fffdf0');

/** A color and how much of it there is, 0..1. */
interface Ink {
  readonly color: Color;
  readonly cover: number;
}

/** Wick's lantern, for the light meter of the screen: soft edges, and a glow that fades to nothing. */
export function paintLantern(): StraightRaster {
  const codes = new Uint8Array(SIZE * SIZE * 4);
  for (let texel = 0; texel < SIZE * SIZE; texel++) {
    const sum = [0, 0, 0];
    let alpha = 0;
    for (let sample = 0; sample < GRID * GRID; sample++) {
      const x = (texel % SIZE) + ((sample % GRID) + 0.5) / GRID;
      const y = Math.floor(texel / SIZE) + (Math.floor(sample / GRID) + 0.5) / GRID;
      const { color, cover } = stacked(glow(x, y), body(x, y));
      alpha += cover;
      for (let channel = 0; channel < 3; channel++) sum[channel] += color[channel] * cover;
    }
    const a = Math.round((alpha * 255) / (GRID * GRID));
    if (a === 0) continue;
    codes.set([...sum.map((each) => Math.round(each / alpha)), a], texel * 4);
  }
  return { kind: 'straight', extent: { width: SIZE, height: SIZE }, channels: 4, depth: 8, codes };
}

function stacked(under: Ink, over: Ink): Ink {
  const cover = over.cover + under.cover * (1 - over.cover);
  return { color: mixColor(under.color, over.color, cover === 0 ? 0 : over.cover / cover), cover };
}

function glow(x: number, y: number): Ink {
  const dx = x - 32;
  const dy = (y - 37) * 0.98;
  const far = clamp(1 - Math.sqrt(dx * dx + dy * dy) / 29);
  return { color: mixColor(hex('#ff8a2a'), hex('#ffe9a0'), far), cover: 0.85 * far * far };
}

function body(x: number, y: number): Ink {
  const across = Math.abs(x - 32);
  const parts: (Ink | null)[] = [
    handle(x, y),
    plate(x, y, { top: 15, bottom: 18.5, halfTop: 3, halfBottom: 4 }),
    plate(x, y, { top: 18.5, bottom: 26, halfTop: 5, halfBottom: 14 }),
    plate(x, y, { top: 26, bottom: 29, halfTop: 15, halfBottom: 15 }),
    plate(x, y, { top: 48, bottom: 51, halfTop: 14, halfBottom: 14 }),
    plate(x, y, { top: 51, bottom: 56, halfTop: 16, halfBottom: 17.5 }),
    y > 29 && y < 48 && (across < 1 || (across > 11 && across < 13))
      ? { color: iron(across < 1 ? 0.42 : shine(x, 13)), cover: 1 }
      : null,
    y > 29 && y < 48 && across < 11 ? pane(x, y) : null,
  ];
  return parts.find((part) => part !== null) ?? { color: [0, 0, 0], cover: 0 };
}

function handle(x: number, y: number): Ink | null {
  const dx = x - 32;
  const dy = y - 11.5;
  const off = Math.abs(Math.sqrt(dx * dx + dy * dy) - 5.6);
  if (off >= 1.5 || y > 16) return null;
  return { color: iron(clamp(0.55 - 0.05 * (dx + dy) - 0.15 * off)), cover: 1 };
}

/** A band of sheet iron, bent round: light falls from the upper left. */
function plate(
  x: number,
  y: number,
  { top, bottom, halfTop, halfBottom }: { top: number; bottom: number; halfTop: number; halfBottom: number },
): Ink | null {
  if (y < top || y >= bottom) return null;
  const down = (y - top) / (bottom - top);
  const half = mix(halfTop, halfBottom, down);
  if (Math.abs(x - 32) >= half) return null;
  const rim = y - top < 0.9 ? 0.22 : 0;
  return { color: iron(clamp(shine(x, half) + rim - 0.22 * down)), cover: 1 };
}

function shine(x: number, half: number): number {
  const at = (x - 32) / half;
  return 0.34 + 0.46 * smoothstep(0.55, 0, Math.abs(at + 0.42)) - 0.2 * smoothstep(0.2, 1, at);
}

function pane(x: number, y: number): Ink {
  const flame = toSegment([x, y], [32, 36], [32, 43]);
  const width = mix(1.6, 4.2, flame.along);
  const heat = smoothstep(width + 9, width * 0.3, flame.distance);
  const corner = smoothstep(16, 4, Math.abs(x - 32) + Math.abs(y - 30) * 0.3) * 0.12;
  const streak = Math.abs(x - 26 + (y - 38) * 0.25) < 0.9 && y < 41 ? 0.2 : 0;
  return { color: glass(clamp(0.18 + 0.8 * heat + corner + streak)), cover: 1 };
}
