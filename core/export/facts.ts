import type { SourceHeader } from '../codec/source.ts';
import { byteText, extentText, figure } from '../figures.ts';
import type { KernelChoice, Target, Treatment } from '../treatment/treatment.ts';
import { paramWords } from './kernels.ts';
import type { ProofOrder } from './order.ts';

/** A line of what is known: a name, and words. */
export interface Fact {
  readonly name: string;
  readonly text: string;
}

/** What the file is, in one line. */
export function sourceWords(header: SourceHeader, { image }: ProofOrder): string {
  const words = [extentText(header.extent), `${header.depth} bits`, CHANNELS[header.channels]];
  if (header.indexed !== null) words.push(`palette of ${header.indexed.palette.length / 4}`);
  return [...words, `${header.format.toUpperCase()} of ${byteText(image.length)}`].join('   ');
}

const CHANNELS = { 1: 'gray', 2: 'gray and alpha', 3: 'RGB', 4: 'RGBA' } as const;

/** What the treatment makes of it, in words. Settings that cannot matter to this file are left out. */
export function factsOf(header: SourceHeader, { path, settings }: ProofOrder): readonly Fact[] {
  const { treatment, globs, file } = settings;
  const hasAlpha = header.channels % 2 === 0;
  const facts: Fact[] = [
    { name: 'path', text: path },
    {
      name: 'treatment',
      text: file === null ? 'built-in defaults' : `${globs?.join(', ') ?? 'defaults'} of ${file}`,
    },
    { name: 'content', text: contentWords(treatment) },
  ];
  if (hasAlpha) facts.push({ name: 'alpha', text: alphaWords(treatment) });
  const derived = treatment.levels === 'none' ? '' : `, ${DERIVED[treatment.derive]}`;
  facts.push({ name: 'smaller', text: `${kernelWords(treatment.kernel.minify)}${derived}` });
  if (treatment.targets.length > 0) facts.push({ name: 'larger', text: kernelWords(treatment.kernel.magnify) });
  const { x, y } = treatment.wrap;
  facts.push({ name: 'edges', text: x === y ? x : `${x} across, ${y} down` });
  if (treatment.grid !== null) facts.push({ name: 'grid', text: gridWords(treatment.grid) });
  facts.push({ name: 'levels', text: levelWords(treatment) });
  if (treatment.targets.length > 0) {
    facts.push({ name: 'targets', text: treatment.targets.map(targetWords).join(', ') });
  }
  const limits = limitWords(treatment);
  if (limits !== '') facts.push({ name: 'limits', text: limits });
  return facts;
}

const DERIVED = { previous: 'each level from the one before', base: 'each level from level 0' } as const;

function contentWords({ content, channels, transfer, light }: Treatment): string {
  if (channels !== null) {
    return Object.entries(channels)
      .map(([letters, meaning]) => `${letters} ${meaning}`)
      .join(', ');
  }
  const coded = typeof transfer === 'string' ? transfer : transfer.join(' ');
  if (content !== 'color') return `${content}, ${coded} codes`;
  return `color, ${coded} codes, filtered ${light === 'linear' ? 'in linear light' : 'in code space'}`;
}

function alphaWords({ alpha, fill }: Treatment): string {
  const words: string[] = [alpha.use];
  if (alpha.use === 'mask') words[0] = `mask ${alpha.test} ${figure(alpha.cutoff, 3)}`;
  if (alpha.use === 'mask' || alpha.use === 'opacity') {
    words.push(alpha.weight ? 'weighs color' : 'does not weigh color');
    if (alpha.use === 'mask') words.push(alpha.keepCoverage ? 'coverage kept' : 'coverage not kept');
    words.push(`fill ${fill}`);
  }
  return words.join(', ');
}

export function kernelWords(kernel: KernelChoice): string {
  const params = paramWords(kernel);
  return params === '' ? kernel.name : `${kernel.name} (${params})`;
}

function gridWords({ cell, gutter }: NonNullable<Treatment['grid']>): string {
  return `cells of ${cell[0]}×${cell[1]}${gutter > 0 ? `, gutters of ${gutter}` : ''}`;
}

function levelWords({ levels, outputs }: Treatment): string {
  const files = outputs.map((each) => each.toUpperCase()).join(' and ');
  if (levels === 'none') return `none; ${files}`;
  const span = levels.last === null ? `${levels.first} to the last` : `${levels.first} to ${levels.last}`;
  return `${span}, as ${files}`;
}

function targetWords(target: Target): string {
  if ('scale' in target) return target.name;
  const [width, height] = 'cell' in target ? target.cell : target.extent;
  const size = `${width}×${height}`;
  const what = 'cell' in target ? `cell ${size}` : size;
  return target.name === `${width}x${height}` ? what : `${target.name} (${what})`;
}

function limitWords({ limits }: Treatment): string {
  const words: string[] = [];
  if (limits.thinning !== null) words.push(`thinning ${figure(limits.thinning * 100)} %`);
  if (limits.halo !== null) words.push(`halo ${figure(limits.halo)}`);
  if (limits.overBudget !== null) words.push(`${byteText(limits.overBudget.bytes)} as ${limits.overBudget.format}`);
  return words.join(', ');
}
