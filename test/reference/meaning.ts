import type { Transfer } from '../../core/color/transfer.ts';
import type { ChannelContent, Treatment } from '../../core/treatment/treatment.ts';

/** What the channels of a file are, read off its treatment. */
export interface Meaning {
  /** Transfer function that filtering undoes, for each stored channel. */
  readonly transfer: readonly Transfer[];
  /** The channel that is an alpha of opacity or mask, null where there is none. */
  readonly alpha: number | null;
  /** An alpha that nobody reads: stored as the largest code. */
  readonly unused: number | null;
  /** Channels weighted by alpha. */
  readonly weighted: readonly number[];
  /** A normal's channels; z may be an added one behind the file's, and may be rebuilt from x and y. */
  readonly normal: { readonly x: number; readonly y: number; readonly z: number; readonly rebuilt: boolean } | null;
  /** The roughness that takes up the spread of the same file's normals. */
  readonly roughness: number | null;
}

export function meaningOf(channels: number, treatment: Treatment): Meaning {
  const contents = contentsOf(channels, treatment);
  const { use, weight } = treatment.alpha;
  const alphaAt = contents.indexOf('alpha');
  const alpha = alphaAt >= 0 && (use === 'opacity' || use === 'mask') ? alphaAt : null;
  const of = contents.flatMap((content, c) => (content === 'normal' ? [c] : []));
  const normal =
    of.length < 2
      ? null
      : { x: of[0], y: of[1], z: of[2] ?? channels, rebuilt: of.length === 2 || treatment.normal.count === 2 };
  const all = normal !== null && normal.z === channels ? [...contents, 'normal' as const] : contents;
  const weighted = all.flatMap((content, c) => (c === alpha || (content === 'normal' && use === 'mask') ? [] : [c]));
  const rough = contents.indexOf('roughness');
  return {
    transfer: contents.map((content, c) => transferOf(content, c, treatment)),
    alpha,
    unused: alphaAt >= 0 && use === 'none' ? alphaAt : null,
    weighted: alpha !== null && weight ? weighted : [],
    normal,
    roughness: rough >= 0 ? rough : null,
  };
}

type Named = ChannelContent | 'alpha';

function contentsOf(channels: number, treatment: Treatment): Named[] {
  if (channels === 2 && treatment.content === 'normal' && treatment.channels === null) return ['normal', 'normal'];
  const letters = [['r'], ['r', 'a'], ['r', 'g', 'b'], ['r', 'g', 'b', 'a']][channels - 1];
  return letters.map((letter) => {
    for (const [group, content] of Object.entries(treatment.channels ?? {})) {
      if (group.includes(letter)) return content;
    }
    return letter === 'a' ? 'alpha' : treatment.content;
  });
}

function transferOf(content: Named, channel: number, treatment: Treatment): Transfer {
  if (content === 'alpha' || content === 'normal' || content === 'roughness') return 'linear';
  if (content === 'color' && treatment.light === 'code') return 'linear';
  return typeof treatment.transfer === 'string' ? treatment.transfer : treatment.transfer[channel];
}
