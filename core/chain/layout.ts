import type { Transfer } from '../color/transfer.ts';
import { refuse } from '../problem.ts';
import type { ChannelCount, Depth, Extent } from '../raster/raster.ts';
import type { Layout, Role } from '../resample/encoding.ts';
import type { NormalGroup } from '../resample/engine.ts';
import type { ChannelContent, Treatment } from '../treatment/treatment.ts';

/** What a chain is built from, known before its rows are. */
export interface ChainHead {
  readonly extent: Extent;
  readonly channels: ChannelCount;
  readonly depth: Depth;
  readonly indexed: boolean;
  /** Exponent that the file's own tag says its colors were encoded with, where it is obeyed: light = code^(1/gamma). Left
   *  out where colors are sRGB. */
  readonly gamma?: number;
}

export function planLayout(head: ChainHead, treatment: Treatment): Layout {
  const { channels } = head;
  const contents = contentsOf(channels, treatment);
  const normals = normalGroups(channels, contents, treatment);
  const roles = contents.map((content, channel) => roleOf(content, channel, treatment));
  const alpha = indexOrNull(roles.findIndex((role) => role.kind === 'opacity'));
  const { use, weight } = treatment.alpha;
  const weighs = alpha !== null && weight;
  const weighted = weighs
    ? roles.flatMap((role, channel) => {
        if (role.kind === 'opacity' || (role.kind === 'normal' && use !== 'opacity')) return [];
        return [channel];
      })
    : [];
  // A rebuilt z stands behind the source's channels and weighs like x and y.
  const rebuilt = weighs && use === 'opacity' ? normals.map((group) => group.z).filter((z) => z >= channels) : [];
  return {
    channels,
    depth: head.depth,
    roles,
    alpha,
    weighted: [...weighted, ...rebuilt],
    normals,
    gamma: head.gamma ?? null,
    roughness: indexOrNull(roles.findIndex((role) => role.kind === 'roughness')),
  };
}

/** How many channels come before alpha's place: 1 of a gray file, 3 of any other. */
export function frontChannels(channels: ChannelCount): 1 | 3 {
  return channels >= 3 ? 3 : 1;
}

/** Whether light lies in the front channels. */
export function holdsColor(layout: Layout): boolean {
  const count = frontChannels(layout.channels);
  return layout.roles.slice(0, count).every((role) => role.kind === 'color');
}

type ChannelMeaning = ChannelContent | 'alpha';

function contentsOf(channels: ChannelCount, treatment: Treatment): ChannelMeaning[] {
  // A gray-and-alpha file is the one two-channel raster there is: as a normal map its alpha is y.
  if (channels === 2 && treatment.content === 'normal' && treatment.channels === null) return ['normal', 'normal'];
  const letters = lettersOf(channels);
  const meanings = letters.map((letter): ChannelMeaning => (letter === 'a' ? 'alpha' : treatment.content));
  for (const [group, content] of Object.entries(treatment.channels ?? {})) {
    for (const letter of group) {
      const channel = letters.indexOf(letter);
      if (channel < 0) refuse('channel-missing', { letter, channels, letters: letters.join(', ') });
      meanings[channel] = content;
    }
  }
  return meanings;
}

/** The letters by which settings name the channels of a file. */
export function lettersOf(channels: ChannelCount): readonly string[] {
  return [['r'], ['r', 'a'], ['r', 'g', 'b'], ['r', 'g', 'b', 'a']][channels - 1];
}

function roleOf(meaning: ChannelMeaning, channel: number, treatment: Treatment): Role {
  switch (meaning) {
    case 'color': {
      const stored = transferOf(treatment, channel);
      return { kind: 'color', transfer: treatment.light === 'code' ? 'linear' : stored, stored };
    }
    case 'alpha':
      return alphaRole(treatment);
    case 'normal':
      return { kind: 'normal' };
    case 'roughness':
      return { kind: 'roughness' };
    case 'data':
    case 'height':
      return transferOf(treatment, channel) === 'srgb'
        ? { kind: 'color', transfer: 'srgb', stored: 'srgb' }
        : { kind: 'plain' };
  }
}

function alphaRole(treatment: Treatment): Role {
  switch (treatment.alpha.use) {
    case 'opacity':
    case 'mask':
      return { kind: 'opacity' };
    case 'none':
      return { kind: 'unused' };
    case 'data':
      return { kind: 'plain' };
  }
}

function transferOf(treatment: Treatment, channel: number): Transfer {
  const { transfer } = treatment;
  return typeof transfer === 'string' ? transfer : (transfer[channel] ?? 'linear');
}

function normalGroups(
  channels: ChannelCount,
  meanings: readonly ChannelMeaning[],
  treatment: Treatment,
): readonly NormalGroup[] {
  const of = meanings.flatMap((meaning, channel) => (meaning === 'normal' ? [channel] : []));
  if (of.length === 0) return [];
  if (of.length < 2) refuse('normal-channels', { found: of.length, channels });
  const rebuilt = treatment.normal.count === 2 || of.length === 2;
  return [{ x: of[0], y: of[1], z: of[2] ?? channels, rebuilt }];
}

function indexOrNull(index: number): number | null {
  return index < 0 ? null : index;
}
