import type { StraightRaster } from '../../../core/raster/raster.ts';
import { type Canvas, dab, newCanvas, toRaster } from './canvas.ts';
import { between, type Chance, direction, hash, newChance } from './chance.ts';
import { type Ground, ground } from './cobbles.ts';
import { type Color, hex, mixColor, ramp } from './color.ts';
import { bladeAt } from './leaf.ts';
import { layers } from './noise.ts';
import { normalAt, type Relief } from './relief.ts';
import { clamp, smoothstep, wrapped } from './shape.ts';

const SIZE = 512;

/** Where the painter's light comes from: upper left, toward the eye. */
const LIGHT = [-0.5, -0.62, 0.6] as const;

// Shadows lean to blue, lights to yellow: a ramp is how a painter mixes, not a gray times a number.
const STONE_RAMPS = [
  ramp('#23242f', '#41434f', '#6a6a6e', '#94918a', '#bdb5a0', '#ded4b4'),
  ramp('#22262f', '#3c4a55', '#5f7077', '#88968f', '#b0b59d', '#d6d3b0'),
  ramp('#2a2229', '#4f3f42', '#785f56', '#9f8470', '#c3a98a', '#e2cfa6'),
];
const mossRamp = ramp('#141f1c', '#233a25', '#3d5a2a', '#617d30', '#8fa23d', '#bfc75e', '#e3e08c');
const soilRamp = ramp('#15110f', '#2a201b', '#43332a', '#5f4a38');
const LEAF_RAMPS = [
  ramp('#3c1d16', '#7a3a20', '#b8622b', '#dd9740', '#f0c873'),
  ramp('#332415', '#6e5122', '#a98432', '#d2b04a', '#eed98a'),
  ramp('#2c1c1a', '#5a3426', '#875237', '#ad7d52', '#d3ad7d'),
];

/** Mossy cobbles, painted: a plan of color, brushed over in ever smaller touches, then what a brush adds by hand. */
export function paintCobblesColor(): StraightRaster {
  const scene = survey();
  const canvas = newCanvas(SIZE, (x, y) => scene.plan[y * SIZE + x]);
  const chance = newChance(3);
  const brushes = [
    { halfLength: 16, halfWidth: 6.5, spacing: 7, opacity: 0.85, eager: 0 },
    { halfLength: 10, halfWidth: 3.8, spacing: 4.2, opacity: 0.8, eager: 14 },
    { halfLength: 6, halfWidth: 2.2, spacing: 2.6, opacity: 0.75, eager: 20 },
    { halfLength: 3.6, halfWidth: 1.3, spacing: 1.8, opacity: 0.7, eager: 26 },
  ];
  for (const brush of brushes) brushOver(canvas, scene, brush, chance);
  rims(canvas, scene, chance);
  cracks(canvas, scene, chance);
  moss(canvas, scene, chance);
  fallenLeaves(canvas, chance);
  return toRaster(canvas);
}

interface Scene {
  readonly grounds: readonly Ground[];
  readonly normals: readonly (readonly [number, number, number])[];
  readonly lights: Float64Array;
  readonly plan: readonly Color[];
}

function survey(): Scene {
  const texels = Array.from({ length: SIZE * SIZE }, (_, texel) => texel);
  const grounds = texels.map((texel) => ground(((texel % SIZE) + 0.5) / SIZE, (Math.floor(texel / SIZE) + 0.5) / SIZE));
  const relief: Relief = { size: SIZE, heights: Float64Array.from(grounds, (each) => each.height) };
  const normals = texels.map((texel) => normalAt(relief, 26, texel % SIZE, Math.floor(texel / SIZE)));
  const lights = Float64Array.from(normals, ([x, y, z]) => clamp(x * LIGHT[0] + y * LIGHT[1] + z * LIGHT[2]));
  const plan = texels.map((texel) => planned(texel, grounds[texel], lights[texel]));
  return { grounds, normals, lights, plan };
}

function planned(texel: number, each: Ground, light: number): Color {
  const u = ((texel % SIZE) + 0.5) / SIZE;
  const v = (Math.floor(texel / SIZE) + 0.5) / SIZE;
  const stain = layers({ seed: 301, period: 5, count: 4, gain: 0.6 }, u, v) - 0.5;
  const open = each.open;
  const stoneTone = 0.08 + 0.78 * light * (0.45 + 0.55 * open) + 0.28 * stain + 0.16 * (hash(71, each.stone) - 0.5);
  const stoneColor = STONE_RAMPS[Math.floor(hash(72, each.stone) * STONE_RAMPS.length)](stoneTone);
  const lichen = smoothstep(0.1, 0.26, layers({ seed: 331, period: 13, count: 3 }, u, v) - 0.5) * open;
  const spotted = mixColor(stoneColor, mossRamp(0.3 + 0.5 * light), 0.35 * lichen);
  const soilColor = soilRamp(0.1 + 0.9 * light * (0.35 + 0.65 * open) + 0.3 * stain);
  const bare = mixColor(spotted, soilColor, each.soil);
  const mossColor = mossRamp(0.02 + 0.66 * light * (0.5 + 0.5 * each.height) + 0.25 * stain);
  return mixColor(bare, mossColor, each.moss);
}

interface Brush {
  readonly halfLength: number;
  readonly halfWidth: number;
  readonly spacing: number;
  readonly opacity: number;
  /** How far, in codes, the canvas must be from the plan before this brush touches it. */
  readonly eager: number;
}

function brushOver(canvas: Canvas, scene: Scene, brush: Brush, chance: Chance): void {
  const count = Math.round((SIZE * SIZE) / (brush.spacing * brush.spacing));
  for (let touch = 0; touch < count; touch++) {
    const x = chance() * SIZE;
    const y = chance() * SIZE;
    const texel = texelAt(x, y);
    const target = scene.plan[texel];
    const lift = between(chance, 0.93, 1.07);
    if (distance(canvas, texel, target) < brush.eager) continue;
    dab(canvas, {
      x,
      y,
      along: contour(scene, texel, chance),
      halfLength: brush.halfLength * between(chance, 0.7, 1.3),
      halfWidth: brush.halfWidth * between(chance, 0.7, 1.2),
      color: [target[0] * lift, target[1] * lift * between(chance, 0.985, 1.015), target[2] * lift],
      opacity: brush.opacity,
      seed: touch,
    });
  }
}

/** A hand follows the edge of what it paints; on flat ground it wanders. */
function contour(scene: Scene, texel: number, chance: Chance): readonly [number, number] {
  const [nx, ny] = scene.normals[texel];
  const [wx, wy] = direction(chance);
  const wander = 0.12;
  const x = -ny + wx * wander;
  const y = nx + wy * wander;
  const length = Math.sqrt(x * x + y * y) + 1e-9;
  return [x / length, y / length];
}

/** Light caught by the upper left rims of stones, and the dark line under their lower right ones. */
function rims(canvas: Canvas, scene: Scene, chance: Chance): void {
  for (let touch = 0; touch < 9000; touch++) {
    const x = chance() * SIZE;
    const y = chance() * SIZE;
    const texel = texelAt(x, y);
    const { rim, moss: mossy, soil, stone } = scene.grounds[texel];
    const opacity = between(chance, 0.25, 0.6);
    const halfLength = between(chance, 2.5, 6);
    const along = contour(scene, texel, chance);
    const lit = scene.lights[texel];
    if (mossy > 0.3 || soil > 0.6) continue;
    const tone = STONE_RAMPS[Math.floor(hash(72, stone) * STONE_RAMPS.length)];
    if (rim > 8 && rim < 17 && lit > 0.86) {
      dab(canvas, { x, y, along, halfLength, halfWidth: 1.25, color: tone(0.97), opacity, seed: touch });
    } else if (rim < 9 && lit < 0.4) {
      dab(canvas, { x, y, along, halfLength, halfWidth: 1.4, color: tone(0.02), opacity: opacity * 0.8, seed: touch });
    }
  }
}

/** Hairline breaks that run over a stone and die away, each with a thread of light beside it. */
function cracks(canvas: Canvas, scene: Scene, chance: Chance): void {
  for (let crack = 0; crack < 70; crack++) {
    let x = chance() * SIZE;
    let y = chance() * SIZE;
    let [dx, dy] = direction(chance);
    const length = between(chance, 6, 16);
    for (let step = 0; step < length; step++) {
      const texel = texelAt(x, y);
      const { rim, moss: mossy, soil } = scene.grounds[texel];
      const [tx, ty] = direction(chance);
      if (rim < 7 || mossy > 0.2 || soil > 0.2) break;
      const fade = 1 - step / length;
      const along = [dx, dy] as const;
      const shared = { along, halfLength: 2.6, seed: crack * 40 + step };
      dab(canvas, { ...shared, x: x + 1, y: y + 1.1, halfWidth: 1, color: hex('#d8ccb0'), opacity: 0.35 * fade });
      dab(canvas, { ...shared, x, y, halfWidth: 0.6 + 0.7 * fade, color: hex('#1d1c24'), opacity: 0.85 * fade });
      const size = Math.sqrt((dx + tx * 0.5) * (dx + tx * 0.5) + (dy + ty * 0.5) * (dy + ty * 0.5)) + 1e-9;
      [dx, dy] = [(dx + tx * 0.5) / size, (dy + ty * 0.5) / size];
      x += dx * 2.2;
      y += dy * 2.2;
    }
  }
}

/** Moss is leaflets: dark ones first, light ones on top where the cushions rise. */
function moss(canvas: Canvas, scene: Scene, chance: Chance): void {
  const passes = [
    { count: 9000, tone: -0.12, size: 1.25, opacity: 0.7 },
    { count: 11000, tone: 0.02, size: 1, opacity: 0.75 },
    { count: 7000, tone: 0.2, size: 0.8, opacity: 0.8 },
  ];
  for (const pass of passes) {
    for (let leaflet = 0; leaflet < pass.count; leaflet++) {
      const x = chance() * SIZE;
      const y = chance() * SIZE;
      const texel = texelAt(x, y);
      const { moss: mossy, height } = scene.grounds[texel];
      const light = scene.lights[texel];
      const [ax, ay] = direction(chance);
      const tone =
        0.08 + 0.6 * light * (0.4 + 0.75 * height) + pass.tone * (0.4 + light) + between(chance, -0.08, 0.08);
      const size = pass.size * between(chance, 0.75, 1.3);
      if (mossy < between(chance, 0.15, 0.8)) continue;
      if (pass.tone > 0.1 && light < 0.62) continue;
      dab(canvas, {
        x,
        y,
        along: [ax, ay],
        halfLength: 3.4 * size,
        halfWidth: 1.5 * size,
        color: mossRamp(tone),
        opacity: pass.opacity,
        seed: leaflet,
      });
    }
  }
}

/** A few leaves of alder that the wind brought, each with its shadow. */
function fallenLeaves(canvas: Canvas, chance: Chance): void {
  for (let index = 0; index < 11; index++) {
    const leaf = {
      x: chance() * SIZE,
      y: chance() * SIZE,
      along: direction(chance),
      length: between(chance, 24, 36),
      seed: 700 + index,
    };
    const color = LEAF_RAMPS[index % LEAF_RAMPS.length];
    stamp(canvas, { ...leaf, x: leaf.x + 2.5, y: leaf.y + 3.5 }, () => ({ color: hex('#15130f'), cover: 0.6 }));
    stamp(canvas, leaf, (tone) => ({ color: color(tone), cover: 1 }));
  }
}

interface Fallen {
  readonly x: number;
  readonly y: number;
  readonly along: readonly [number, number];
  readonly length: number;
  readonly seed: number;
}

function stamp({ paint }: Canvas, leaf: Fallen, ink: (tone: number) => { color: Color; cover: number }): void {
  const [ax, ay] = leaf.along;
  const lit = ay < ax ? 1 : -1;
  const reach = Math.ceil(leaf.length);
  for (let y = Math.floor(leaf.y) - reach; y <= leaf.y + reach; y++) {
    for (let x = Math.floor(leaf.x) - reach; x <= leaf.x + reach; x++) {
      for (let sample = 0; sample < 9; sample++) {
        const dx = x + ((sample % 3) + 0.5) / 3 - leaf.x;
        const dy = y + (Math.floor(sample / 3) + 0.5) / 3 - leaf.y;
        const along = (dx * ax + dy * ay) / leaf.length;
        const across = (dy * ax - dx * ay) / leaf.length - 0.14 * along * along;
        const blade = bladeAt(along, across * lit, leaf.seed);
        if (blade === null) continue;
        const { color, cover } = ink(blade.tone - 0.3 * blade.rim);
        const at = texelAt(x, y) * 3;
        // Each of nine samples covers the ninth part of what the ones before it left.
        for (let channel = 0; channel < 3; channel++) {
          paint[at + channel] += ((color[channel] - paint[at + channel]) * cover) / (9 - sample * cover);
        }
      }
    }
  }
}

function texelAt(x: number, y: number): number {
  return wrapped(Math.floor(y), SIZE) * SIZE + wrapped(Math.floor(x), SIZE);
}

function distance({ paint }: Canvas, texel: number, color: Color): number {
  return Math.max(
    Math.abs(paint[texel * 3] - color[0]),
    Math.abs(paint[texel * 3 + 1] - color[1]),
    Math.abs(paint[texel * 3 + 2] - color[2]),
  );
}
