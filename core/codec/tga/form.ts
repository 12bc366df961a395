import type { ChannelCount, Extent } from '../../raster/raster.ts';
import type { TgaHeader } from './header.ts';
import { colorChannels } from './texel.ts';

/** What the rows of a TGA will hold. */
export interface TgaForm {
  readonly extent: Extent;
  /** Of the expanded raster. */
  readonly channels: ChannelCount;
  /** A color map that fits indices of 8 bits is kept; another one has to be expanded. */
  readonly indexed: boolean;
  /** Codes a texel has in a row. */
  readonly rowChannels: ChannelCount;
}

export function tgaForm(header: TgaHeader): TgaForm {
  const { extent, texelBits, map } = header;
  const channels = channelsOf(header);
  const indexed = map !== null && texelBits === 8 && map.length <= 256;
  return { extent, channels, indexed, rowChannels: indexed ? 1 : channels };
}

function channelsOf({ kind, texelBits, alpha, map }: TgaHeader): ChannelCount {
  if (kind === 'gray') return texelBits === 16 ? 2 : 1;
  return colorChannels(map === null ? texelBits : map.entryBits, alpha);
}
