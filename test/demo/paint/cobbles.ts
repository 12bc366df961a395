import { hash } from './chance.ts';
import { layers } from './noise.ts';
import { clamp, mix, smoothMin, smoothstep, wrapped } from './shape.ts';

/** The ground behind color, normals and roughness: cobbles in damp soil, moss over both. */
export interface Ground {
  /** 0..1 of the tile's relief. */
  readonly height: number;
  /** Which stone, 0..STONES-1. */
  readonly stone: number;
  /** Distance from the stone's rim, in 1/512 of the tile; negative never. */
  readonly rim: number;
  /** Share of moss, of soil, and the rest stone, 0..1. */
  readonly moss: number;
  readonly soil: number;
  /** Light that gaps let in, 0..1. */
  readonly open: number;
}

const COLUMNS = 6;
const ROWS = 8;
export const STONES: number = COLUMNS * ROWS;

/** Lengths below are in texels of a tile this wide, whatever the size that is painted. */
const TILE = 512;

const SEED = 11;

/** The ground at a point; u and v 0..1 over the tile, closing on itself. */
export function ground(u: number, v: number): Ground {
  const x = (u + 0.02 * (layers({ seed: SEED, period: 9, count: 2 }, u, v) - 0.5)) * TILE;
  const y = (v + 0.02 * (layers({ seed: SEED + 40, period: 9, count: 2 }, u, v) - 0.5)) * TILE;
  const { stone, rim, fromCenter } = nearestStone(x, y);
  const grain = layers({ seed: SEED + 80, period: 32, count: 4, gain: 0.6 }, u, v) - 0.5;
  const stoneHeight = stoneRelief(stone, rim, fromCenter) + 0.06 * grain;
  const soilHeight = 0.12 + 0.16 * layers({ seed: SEED + 120, period: 24, count: 3 }, u, v);
  const patch = layers({ seed: SEED + 160, period: 4, count: 4, gain: 0.55 }, u, v);
  const tufts = layers({ seed: SEED + 200, period: 30, count: 3, gain: 0.6 }, u, v);
  const mossHeight = 0.06 + 0.95 * smoothstep(0.44, 0.78, patch) + 0.34 * (tufts - 0.5);
  const bare = Math.max(stoneHeight, soilHeight);
  return {
    height: clamp(Math.max(bare, mossHeight) * 0.9),
    stone,
    rim,
    moss: smoothstep(-0.05, 0.03, mossHeight - bare),
    soil: smoothstep(-0.03, 0.03, soilHeight - stoneHeight),
    open: smoothstep(-6, 20, rim),
  };
}

/** Middle of a stone, in cells. */
function middle(column: number, row: number): readonly [number, number] {
  const c = wrapped(column, COLUMNS);
  const r = wrapped(row, ROWS);
  const shift = r % 2 === 0 ? 0.25 : 0.75;
  return [column + shift + 0.44 * (hash(SEED, c, r) - 0.5), row + 0.5 + 0.42 * (hash(SEED + 1, c, r) - 0.5)];
}

function nearestStone(x: number, y: number): { stone: number; rim: number; fromCenter: readonly [number, number] } {
  const cellX = TILE / COLUMNS;
  const cellY = TILE / ROWS;
  const near: { id: number; dx: number; dy: number; squared: number }[] = [];
  const column = Math.floor(x / cellX);
  const row = Math.floor(y / cellY);
  for (let r = row - 2; r <= row + 2; r++) {
    for (let c = column - 2; c <= column + 2; c++) {
      const [mx, my] = middle(c, r);
      const dx = mx * cellX - x;
      const dy = my * cellY - y;
      near.push({ id: wrapped(r, ROWS) * COLUMNS + wrapped(c, COLUMNS), dx, dy, squared: dx * dx + dy * dy });
    }
  }
  let first = near[0];
  for (const each of near) if (each.squared < first.squared) first = each;
  let rim = Number.POSITIVE_INFINITY;
  for (const each of near) {
    if (each === first) continue;
    const ex = each.dx - first.dx;
    const ey = each.dy - first.dy;
    // Distance from the border of two Voronoi cells: half way between their middles, along the line that joins them.
    const distance = ((first.dx + each.dx) * ex + (first.dy + each.dy) * ey) / (2 * Math.sqrt(ex * ex + ey * ey));
    rim = smoothMin(rim === Number.POSITIVE_INFINITY ? distance + 99 : rim, distance, 13);
  }
  return { stone: first.id, rim: Math.max(0, rim), fromCenter: [-first.dx, -first.dy] };
}

/** A worn block: rounded at the rim, with a few flat breaks across its top. */
function stoneRelief(stone: number, rim: number, [x, y]: readonly [number, number]): number {
  const shoulder = clamp((rim - 1) / 15);
  const top = mix(0.72, 1, hash(SEED + 2, stone));
  let height = top * (1 - (1 - shoulder) * (1 - shoulder));
  for (let flat = 0; flat < 4; flat++) {
    const ex = hash(SEED + 3 + flat, stone) - 0.5;
    const ey = hash(SEED + 13 + flat, stone) - 0.5;
    const length = Math.sqrt(ex * ex + ey * ey) + 1e-6;
    const from = mix(-4, 16, hash(SEED + 23 + flat, stone));
    const slope = mix(0.006, 0.016, hash(SEED + 33 + flat, stone));
    const cut = top - slope * Math.max(0, (x * ex + y * ey) / length - from);
    height = smoothMin(height, cut, 0.02);
  }
  return height;
}
