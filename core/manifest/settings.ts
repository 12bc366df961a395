import type { Transfer } from '../color/transfer.ts';
import { allows, findKernel } from '../kernel/table.ts';
import type { Wrap } from '../kernel/wrap.ts';
import type {
  AlphaTreatment,
  ChannelContent,
  KernelChoice,
  Limits,
  Roughness,
  Target,
  Treatment,
} from '../treatment/treatment.ts';
import {
  choice,
  dictionary,
  either,
  flag,
  integer,
  list,
  Misfit,
  nothing,
  number,
  object,
  pair,
  type Shape,
  text,
} from './shape.ts';

const texels = integer(1, 16384);

const transfer = choice<Transfer>('srgb', 'linear');

const wrap = choice<Wrap>('clamp-to-edge', 'repeat', 'mirror-repeat', 'clamp-to-border');

/** A kernel of the table with every parameter it has, no other, each in its range. */
const kernelChoice: Shape<KernelChoice> = (value, at) => {
  const loose = looseKernel(value, at);
  const kernel = findKernel(loose.name);
  if (kernel === undefined) throw new Misfit(`${at}.name`, 'a kernel of this version');
  const params: Record<string, number> = {};
  for (const param of kernel.params) {
    const place = `${at}.params.${param.name}`;
    params[param.name] = number(param.min, param.max)(loose.params[param.name], place);
    if (!allows(param, params[param.name])) throw new Misfit(place, `one of ${param.allowed?.join(', ')}`);
  }
  if (Object.keys(loose.params).length !== kernel.params.length)
    throw new Misfit(`${at}.params`, 'its parameters alone');
  return { name: kernel.name, params };
};

const looseKernel = object<KernelChoice>({
  name: text(/^[a-z0-9-]{1,32}$/, 'a kernel name'),
  params: dictionary(number(-Infinity, Infinity), /^[a-zA-Z]{1,32}$/, compareText),
});

const alpha: Shape<AlphaTreatment> = object<AlphaTreatment>({
  use: choice('opacity', 'mask', 'data', 'none'),
  cutoff: number(0, 1),
  test: choice('>=', '>'),
  keepCoverage: flag,
  store: choice('straight', 'premultiplied'),
  weight: flag,
});

const name = text(/^\P{Cc}{1,1024}$/u, 'a text of 1..1024 characters');

const roughness: Shape<Roughness> = either<Roughness>(
  nothing,
  object<{ constant: number }>({ constant: number(0, 1) }),
  object<{ path: string; channel: 'r' | 'g' | 'b' | 'a' }>({ path: name, channel: choice('r', 'g', 'b', 'a') }),
);

const target: Shape<Target> = either<Target>(
  object<{ name: string; scale: number }>({ name, scale: number(0, 16384) }),
  object<{ name: string; extent: readonly [number, number] }>({ name, extent: pair(texels) }),
  object<{ name: string; cell: readonly [number, number] }>({ name, cell: pair(texels) }),
);

const limits: Shape<Limits> = object<Limits>({
  thinning: either<number | null>(nothing, number(0, 1)),
  halo: either<number | null>(nothing, number(0, 255)),
  overBudget: either<Limits['overBudget']>(
    nothing,
    object<NonNullable<Limits['overBudget']>>({ bytes: number(0, Number.MAX_SAFE_INTEGER), format: name }),
  ),
});

/** A treatment with every setting explicit, in the order that manifests write. */
export const treatmentShape: Shape<Treatment> = object<Treatment>({
  content: choice('color', 'normal', 'height', 'data'),
  channels: either<Treatment['channels']>(
    nothing,
    dictionary(
      choice<ChannelContent>('color', 'normal', 'height', 'data', 'roughness'),
      /^(?=.)r?g?b?a?$/,
      compareChannels,
    ),
  ),
  transfer: either<Treatment['transfer']>(list(transfer), transfer),
  light: choice('linear', 'code'),
  alpha,
  fill: choice('none', 'hidden', 'all'),
  kernel: object<Treatment['kernel']>({ minify: kernelChoice, magnify: kernelChoice }),
  derive: choice('previous', 'base'),
  wrap: object<Treatment['wrap']>({ x: wrap, y: wrap }),
  levels: either<Treatment['levels']>(
    choice('none'),
    object<Exclude<Treatment['levels'], 'none'>>({
      first: integer(0, 14),
      last: either<number | null>(nothing, integer(0, 14)),
    }),
  ),
  targets: list(target),
  grid: either<Treatment['grid']>(
    nothing,
    object<NonNullable<Treatment['grid']>>({ cell: pair(texels), gutter: integer(0, 16384) }),
  ),
  depth: choice<'same' | 8 | 16>('same', 8, 16),
  outputs: list(choice('png', 'ktx2')),
  name: either<string | null>(nothing, name),
  ktx2: object<Treatment['ktx2']>({ supercompress: choice('none', 'zlib'), format: choice('same', 'wide') }),
  normal: object<Treatment['normal']>({
    count: choice<2 | 3>(2, 3),
    y: choice('up', 'down'),
    base: choice('keep', 'renormalise'),
    roughness,
  }),
  height: object<Treatment['height']>({ minmax: flag }),
  png: object<Treatment['png']>({ base: flag }),
  colorChunks: choice('ignore', 'obey'),
  view: object<Treatment['view']>({
    texelsPerMeter: either<number | null>(nothing, number(0, Number.MAX_VALUE)),
    fovY: number(0, 180),
    screenHeight: number(0, Number.MAX_SAFE_INTEGER),
    blend: choice('linear', 'code'),
  }),
  limits,
});

/** Whether two treatments ask for the same thing; the order of keys does not matter. */
export function sameSettings(a: Treatment, b: Treatment): boolean {
  return JSON.stringify(treatmentShape(a, 'settings')) === JSON.stringify(treatmentShape(b, 'settings'));
}

function compareText(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}

/** Groups in the order of their first channel. */
function compareChannels(a: string, b: string): number {
  return 'rgba'.indexOf(a[0]) - 'rgba'.indexOf(b[0]);
}
