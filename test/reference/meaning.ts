import type { Transfer, Treatment } from '../../core/treatment/treatment.ts';

/** What the channels of a file are, read off its treatment. */
export interface Meaning {
  /** Transfer function of each stored channel. */
  readonly transfer: readonly Transfer[];
  /** The channel that is an alpha of opacity or mask, null where there is none. */
  readonly alpha: number | null;
  /** Channels weighted by it. */
  readonly weighted: readonly number[];
  /** Channels of a normal; z is null where it is rebuilt from x and y. */
  readonly normals: readonly { readonly x: number; readonly y: number; readonly z: number | null }[];
  /** Channels of a roughness in the same file. */
  readonly roughness: readonly number[];
}

export function meaningOf(channels: number, treatment: Treatment): Meaning {
  const content = contentOf(channels, treatment);
  const alphaUse = treatment.alpha.use === 'opacity' || treatment.alpha.use === 'mask';
  const alpha = channels % 2 === 0 && alphaUse && treatment.channels === null ? channels - 1 : null;
  const transfer = content.map((each, c) => transferOf(each, c, alpha, channels, treatment));
  const others = content.map((_, c) => c).filter((c) => c !== alpha);
  const weighs = alpha !== null && treatment.alpha.weight;
  const weighted = !weighs ? [] : others.filter((c) => content[c] !== 'normal' || treatment.alpha.use === 'opacity');
  const normal = others.filter((c) => content[c] === 'normal');
  const normals =
    normal.length < 2
      ? []
      : [{ x: normal[0], y: normal[1], z: normal.length > 2 && treatment.normal.count === 3 ? normal[2] : null }];
  return { transfer, alpha, weighted, normals, roughness: others.filter((c) => content[c] === 'roughness') };
}

function contentOf(channels: number, treatment: Treatment): string[] {
  const letters = channels <= 2 ? ['r', 'a'].slice(0, channels) : ['r', 'g', 'b', 'a'].slice(0, channels);
  return letters.map((letter) => {
    for (const [group, content] of Object.entries(treatment.channels ?? {})) {
      if (group.includes(letter)) return content;
    }
    return treatment.content;
  });
}

function transferOf(
  content: string,
  channel: number,
  alpha: number | null,
  channels: number,
  treatment: Treatment,
): Transfer {
  if (channel === alpha || content === 'normal') return 'linear';
  if (typeof treatment.transfer !== 'string') return treatment.transfer[channel];
  if (channels % 2 === 0 && channel === channels - 1) return 'linear';
  return treatment.transfer;
}
