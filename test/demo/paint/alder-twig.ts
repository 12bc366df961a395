import type { StraightRaster } from '../../../core/raster/raster.ts';
import { hash } from './chance.ts';
import { type Color, hex, mixColor, ramp } from './color.ts';
import { bladeAt } from './leaf.ts';
import { layers } from './noise.ts';
import { cutOut } from './samples.ts';
import { clamp, mix, toSegment } from './shape.ts';

const SIZE = 256;

interface Leaf {
  /** Where its stalk leaves the twig, in texels. */
  readonly x: number;
  readonly y: number;
  /** Direction of its rib, not yet of unit length. */
  readonly toward: readonly [number, number];
  readonly length: number;
  /** How far the rib bends sideways, in leaf lengths. */
  readonly bend: number;
  readonly color: (tone: number) => Color;
}

/** Length of a leaf's stalk, and half its thickness. */
const STALK = { length: 10, half: 0.85 };

const fresh = ramp('#0f2418', '#1f4526', '#3b6c2c', '#6b9638', '#a4bf4f', '#d9e08a');
const deep = ramp('#0c1d1b', '#18382b', '#2b5938', '#4c7d42', '#7fa656', '#bfd08a');
const scales = ramp('#2a1712', '#56301c', '#8a5a2a', '#b98a3f', '#dcb766');
const bark = ramp('#1d1513', '#3b2a24', '#64493a', '#957257', '#c3a27c');
const autumn = ramp('#2c1a12', '#5c3a1a', '#99682a', '#cf9a3c', '#ecc763', '#f8e6a4');

// From the front to the back: the first leaf that covers a point is the one that is seen.
const LEAVES: readonly Leaf[] = [
  { x: 133, y: 124, toward: [0.55, 0.8], length: 88, bend: 0.16, color: fresh },
  { x: 113, y: 143, toward: [-1, -0.12], length: 84, bend: -0.14, color: fresh },
  { x: 171, y: 91, toward: [1, 0.38], length: 72, bend: 0.12, color: deep },
  { x: 150, y: 106, toward: [-0.62, -0.8], length: 80, bend: 0.1, color: fresh },
  { x: 86, y: 173, toward: [0.45, 0.95], length: 66, bend: -0.14, color: autumn },
  { x: 196, y: 69, toward: [0.72, -0.68], length: 64, bend: -0.08, color: fresh },
  { x: 187, y: 77, toward: [-0.35, -1], length: 58, bend: 0.16, color: deep },
  { x: 78, y: 181, toward: [-1, -0.22], length: 58, bend: 0.16, color: deep },
  { x: 132, y: 125, toward: [1, 0.16], length: 50, bend: -0.1, color: deep },
  { x: 100, y: 158, toward: [-0.3, -1], length: 52, bend: 0.12, color: deep },
];

/** The twig from its torn end to its tip, with half its thickness. */
const TWIG = [
  { x: 12, y: 247, half: 3.6 },
  { x: 46, y: 212, half: 3 },
  { x: 84, y: 176, half: 2.5 },
  { x: 124, y: 134, half: 2 },
  { x: 164, y: 95, half: 1.6 },
  { x: 197, y: 68, half: 1 },
];

/** Catkins hang from a thread: where it starts and where it ends. */
const CATKINS = [
  { from: [60, 199], to: [66, 240] },
  { from: [62, 198], to: [80, 246] },
  { from: [176, 86], to: [192, 160] },
  { from: [178, 84], to: [212, 152] },
] as const;

/** A twig of alder, cut out. Color under alpha 0 is black on purpose: that is how painting programs often leave it. */
export function paintAlderTwig(): StraightRaster {
  return cutOut(SIZE, SIZE, (x, y) => leavesAt(x, y) ?? catkinsAt(x, y) ?? twigAt(x, y));
}

function leavesAt(x: number, y: number): Color | null {
  for (const [index, leaf] of LEAVES.entries()) {
    const { along, across } = inLeaf(leaf, x, y);
    const blade = bladeAt(along, across, 40 + index);
    if (blade !== null) {
      const mottle = layers({ seed: 60 + index, period: 20, count: 3 }, x / SIZE, y / SIZE) - 0.5;
      const behind = index * 0.015 + (isShaded(index, x, y) ? 0.2 : 0);
      const tone = clamp(blade.tone + 0.22 * mottle - behind);
      return mixColor(leaf.color(tone), autumn(tone), blade.rim * (0.35 + mottle));
    }
    if (along < 0.06 && Math.abs(across) * leaf.length < STALK.half && along * leaf.length > -STALK.length) {
      return leaf.color(across < 0 ? 0.75 : 0.5);
    }
  }
  return null;
}

/** A point as the leaf sees it: along its rib and across, in leaf lengths, the half with across < 0 up and left. */
function inLeaf({ x: x0, y: y0, toward, length, bend }: Leaf, x: number, y: number): { along: number; across: number } {
  const [tx, ty] = toward;
  const norm = Math.sqrt(tx * tx + ty * ty);
  const dx = x - x0 - (tx / norm) * STALK.length;
  const dy = y - y0 - (ty / norm) * STALK.length;
  const along = (dx * tx + dy * ty) / (norm * length);
  const across = (dy * tx - dx * ty) / (norm * length) - bend * along * along;
  return { along, across: ty < tx ? across : -across };
}

/** Whether a leaf further in front throws its shadow here, down and to the right. */
function isShaded(index: number, x: number, y: number): boolean {
  return LEAVES.slice(0, index).some((leaf, front) => {
    const { along, across } = inLeaf(leaf, x - 4, y - 5);
    return bladeAt(along, across, 40 + front) !== null;
  });
}

function twigAt(x: number, y: number): Color | null {
  for (let part = 1; part < TWIG.length; part++) {
    const a = TWIG[part - 1];
    const b = TWIG[part];
    const { distance, along } = toSegment([x, y], [a.x, a.y], [b.x, b.y]);
    const knot = 0.5 * hash(90, Math.floor((part + along) * 5));
    const half = mix(a.half, b.half, along) + knot * 0.8;
    if (distance >= half) continue;
    // The twig climbs to the right, so its upper left flank is the lit one.
    const lit = x + y < mix(a.x + a.y, b.x + b.y, along) ? 1 : -1;
    const grain = layers({ seed: 91, period: 60, count: 2 }, x / SIZE, y / SIZE) - 0.5;
    return bark(clamp(0.48 + 0.3 * lit * (distance / half) + 0.5 * grain));
  }
  return null;
}

function catkinsAt(x: number, y: number): Color | null {
  for (const { from, to } of CATKINS) {
    const { distance, along } = toSegment([x, y], from, to);
    if (along < 0.3) {
      if (distance < 0.75) return hex('#4a3a24');
      continue;
    }
    // Fourteen rings of scales, swollen in the middle of each, the whole tapered to both ends.
    const ring = (along - 0.3) * 20;
    const swell = ring - Math.floor(ring);
    const taper = Math.sqrt(clamp((along - 0.3) * 9) * clamp((1.02 - along) * 5));
    if (distance >= 3.3 * taper * (0.72 + 1.1 * swell * (1 - swell))) continue;
    const left = from[0] + (to[0] - from[0]) * along - x;
    return scales(clamp(0.34 + left * 0.14 + 0.9 * swell * (1 - swell) + 0.2 * (swell - 0.5)));
  }
  return null;
}
