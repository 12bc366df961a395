import type { Fault } from '../words.ts';
import { defaultKernel } from './defaults.ts';
import { asksFor, can, type Direction, unreachableScale } from './kernel-direction.ts';
import type { Patch } from './merge.ts';
import { placeholders } from './paths/pattern.ts';
import type { KernelChoice, Treatment } from './treatment.ts';

/** A rule between keys. */
export interface Conflict {
  /** Keys that could settle it; the first one that a rule sets is where it is reported. */
  readonly keys: readonly string[];
  /** The problem that a treatment has; null for none. */
  find(treatment: Treatment, merged: Patch): Fault | null;
}

/** Every rule between keys of one treatment. */
export const conflicts: readonly Conflict[] = [
  {
    keys: ['alpha.store', 'outputs'],
    find: ({ alpha, outputs }) =>
      alpha.store === 'premultiplied' && outputs.includes('png') ? { code: 'premultiplied-png', values: {} } : null,
  },
  {
    keys: ['alpha.store', 'alpha.use', 'content', 'channels'],
    find: ({ alpha }) =>
      alpha.store === 'premultiplied' && !isOpacity(alpha.use)
        ? { code: 'premultiplied-use', values: { use: alpha.use } }
        : null,
  },
  {
    keys: ['alpha.keepCoverage', 'alpha.use', 'content', 'channels'],
    find: ({ alpha }) =>
      alpha.keepCoverage && alpha.use !== 'mask' ? { code: 'coverage-use', values: { use: alpha.use } } : null,
  },
  {
    keys: ['alpha.store', 'alpha.keepCoverage', 'alpha.use'],
    find: ({ alpha }) =>
      alpha.keepCoverage && alpha.use === 'mask' && alpha.store === 'premultiplied'
        ? { code: 'coverage-premultiplied', values: {} }
        : null,
  },
  {
    keys: ['wrap.x', 'wrap.y', 'alpha.use', 'content', 'channels'],
    find: ({ wrap, alpha }) =>
      (wrap.x === 'clamp-to-border' || wrap.y === 'clamp-to-border') && !isOpacity(alpha.use)
        ? { code: 'border-use', values: { use: alpha.use } }
        : null,
  },
  {
    keys: ['alpha.use', 'channels'],
    find: ({ alpha, channels }) => {
      const group = Object.keys(channels ?? {}).find((each) => each.includes('a') && channels![each] !== 'color');
      if (group === undefined || alpha.use === 'data') return null;
      return { code: 'alpha-in-group', values: { group, content: channels![group], use: alpha.use } };
    },
  },
  { keys: ['transfer', 'content', 'channels'], find: findNormalTransfer },
  {
    keys: ['normal.count', 'channels'],
    find: ({ normal, channels }) => {
      const group = Object.keys(channels ?? {}).find((each) => channels![each] === 'normal');
      if (group === undefined || group.length === normal.count) return null;
      return { code: 'normal-count', values: { count: normal.count, group } };
    },
  },
  {
    keys: ['normal.roughness', 'normal.roughness.path', 'channels'],
    find: ({ normal, channels }) => {
      const group = Object.keys(channels ?? {}).find((each) => channels![each] === 'roughness');
      return group === undefined || normal.roughness === null ? null : { code: 'roughness-twice', values: { group } };
    },
  },
  {
    keys: ['normal.roughness.channel', 'normal.roughness.path'],
    find: ({ normal }, merged) => {
      const hasPath = normal.roughness !== null && 'path' in normal.roughness;
      return merged.has('normal.roughness.channel') && !hasPath ? { code: 'roughness-pathless', values: {} } : null;
    },
  },
  {
    keys: ['levels.first', 'levels.last'],
    find: ({ levels }) =>
      levels !== 'none' && levels.last !== null && levels.first > levels.last
        ? { code: 'levels-order', values: { first: levels.first, last: levels.last } }
        : null,
  },
  { keys: ['targets'], find: findTargetTwice },
  {
    keys: ['targets', 'outputs'],
    find: ({ targets, outputs }) =>
      targets.length > 0 && !outputs.includes('png') ? { code: 'targets-png', values: {} } : null,
  },
  {
    keys: ['targets', 'alpha.use', 'content', 'channels'],
    find: ({ targets, alpha }) => {
      const cell = targets.find((each) => 'cell' in each);
      if (cell === undefined || isOpacity(alpha.use)) return null;
      return { code: 'cell-use', values: { target: cell.name, use: alpha.use } };
    },
  },
  {
    keys: ['targets', 'grid', 'grid.cell'],
    find: ({ targets, grid }) => {
      const target = targets.find((each) => !('scale' in each));
      return grid === null || target === undefined ? null : { code: 'grid-scale', values: { target: target.name } };
    },
  },
  { keys: ['name', 'outputs', 'levels', 'targets'], find: findPlaceholderMissing },
  {
    keys: ['kernel.minify', 'targets', 'levels'],
    find: (treatment, merged) => findDirection(treatment, merged, 'minify'),
  },
  { keys: ['kernel.magnify', 'targets'], find: (treatment, merged) => findDirection(treatment, merged, 'magnify') },
  {
    keys: ['kernel.magnify', 'targets'],
    find: (treatment) => {
      const target = unreachableScale(treatment);
      if (target === undefined) return null;
      return { code: 'kernel-scale', values: { kernel: treatment.kernel.magnify.name, target: target.name } };
    },
  },
];

function isOpacity(use: Treatment['alpha']['use']): boolean {
  return use === 'opacity' || use === 'mask';
}

function findNormalTransfer({ content, channels, transfer }: Treatment): Fault | null {
  const transfers = typeof transfer === 'string' ? [transfer] : transfer;
  if (channels === null) {
    const isCoded = content === 'normal' && transfers.slice(0, 3).includes('srgb');
    return isCoded ? { code: 'normal-transfer', values: {} } : null;
  }
  const group = Object.keys(channels).find((each) => channels[each] === 'normal');
  const coded = Array.from(group ?? '').some((letter) => {
    return (typeof transfer === 'string' ? transfer : transfer['rgba'.indexOf(letter)]) === 'srgb';
  });
  return coded ? { code: 'normal-transfer', values: {} } : null;
}

function findTargetTwice({ targets }: Treatment): Fault | null {
  const names = targets.map((each) => each.name.toLowerCase());
  const twice = targets.find((_, index) => names.indexOf(names[index]) !== index);
  return twice === undefined ? null : { code: 'target-twice', values: { name: twice.name } };
}

function findPlaceholderMissing({ name, outputs, levels, targets }: Treatment): Fault | null {
  if (name === null || !outputs.includes('png')) return null;
  const given = placeholders(name);
  if (levels !== 'none' && !given.includes('level'))
    return { code: 'name-lacks', values: { placeholder: '{level}', what: 'levels' } };
  if (targets.length > 0 && !given.includes('target'))
    return { code: 'name-lacks', values: { placeholder: '{target}', what: 'targets' } };
  return null;
}

/** A kernel named for one direction that it cannot do, or for both where something asks for the one it cannot. */
function findDirection(treatment: Treatment, merged: Patch, direction: Direction): Fault | null {
  const entry = merged.get(`kernel.${direction}`);
  const choice = entry?.value as KernelChoice | undefined;
  if (choice === undefined || can(choice, direction)) return null;
  const asked = entry!.given === 'alone' ? `kernel.${direction}` : asksFor(treatment, direction);
  if (asked === null) return null;
  const instead = defaultKernel(treatment.content).name;
  return { code: 'kernel-direction', values: { kernel: choice.name, direction, asked, instead } };
}
