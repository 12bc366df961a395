import type { Transfer } from '../color/transfer.ts';
import { defaultParams, findKernel } from '../kernel/table.ts';
import type { AlphaUse, ChannelContent, Content, KernelChoice, Treatment } from './treatment.ts';

// Built-in values that depend on other keys. The constant ones stand in keys.ts.

export function defaultContent(channels: Treatment['channels']): Content {
  if (channels === null) return 'color';
  const groups = Object.keys(channels).sort((a, b) => 'rgba'.indexOf(a[0]) - 'rgba'.indexOf(b[0]));
  const first = channels[groups[0]];
  return first === 'roughness' ? 'data' : first;
}

export function defaultAlphaUse(content: Content, channels: Treatment['channels']): AlphaUse {
  const group = Object.keys(channels ?? {}).find((letters) => letters.includes('a'));
  const meaning = group === undefined ? content : channels![group];
  return meaning === 'color' ? 'opacity' : 'data';
}

/** One transfer where all channels have the same, else one a channel in the order of the file. */
export function defaultTransfer(content: Content, channels: Treatment['channels']): Transfer | readonly Transfer[] {
  if (channels === null) return transferOf(content);
  const letters = channelLetters(channels);
  const transfers = letters.map((letter) => transferOf(contentAt(letter, content, channels)));
  const packed = transfers.filter((_, i) => letters[i] !== 'a' || /a/.test(Object.keys(channels).join()));
  return packed.every((each) => each === packed[0]) ? packed[0] : transfers;
}

export function defaultKernel(content: Content): KernelChoice {
  const name = content === 'color' ? 'kaiser' : 'box';
  return { name, params: defaultParams(findKernel(name)!) };
}

/** Chains of kernels that choose codes drift, or choose among choices, unless each level is made from level 0. */
export function defaultDerive(kernel: KernelChoice): 'previous' | 'base' {
  return ['nearest', 'majority', 'detail', 'even'].includes(kernel.name) ? 'base' : 'previous';
}

export function defaultFill(use: AlphaUse): 'none' | 'hidden' {
  return use === 'opacity' || use === 'mask' ? 'hidden' : 'none';
}

/** The normal group's number of letters; 3 for a file that is not packed. */
export function defaultNormalCount(channels: Treatment['channels']): 2 | 3 {
  const group = Object.keys(channels ?? {}).find((letters) => channels![letters] === 'normal');
  return group?.length === 2 ? 2 : 3;
}

/** Letters of the file: of gray and alpha where no other is named. */
export function channelLetters(channels: NonNullable<Treatment['channels']>): readonly string[] {
  const named = Object.keys(channels).join('');
  if (/[gb]/.test(named)) return ['r', 'g', 'b', 'a'];
  return named.includes('a') ? ['r', 'a'] : ['r'];
}

export function contentAt(
  letter: string,
  content: Content,
  channels: NonNullable<Treatment['channels']>,
): ChannelContent {
  const group = Object.keys(channels).find((letters) => letters.includes(letter));
  // Alpha that no group names is no light, whatever it is used for.
  return group === undefined ? (letter === 'a' ? 'data' : content) : channels[group];
}

function transferOf(content: ChannelContent): Transfer {
  return content === 'color' ? 'srgb' : 'linear';
}
