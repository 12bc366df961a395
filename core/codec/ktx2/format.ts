import type { Transfer } from '../../color/transfer.ts';
import type { ChannelCount, Depth } from '../../raster/raster.ts';
import type { AlphaUse, Content } from '../../treatment/treatment.ts';

/** A texel format of a KTX2 file. */
export interface Ktx2Format {
  readonly name: string;
  /** VkFormat. [Vulkan, "VkFormat"] */
  readonly vkFormat: number;
  readonly channels: ChannelCount;
  readonly depth: Depth;
  /** How the sampler decodes color: what the file's descriptor says. Alpha is linear always. */
  readonly transfer: Transfer;
}

/** Every format that is written. Two-channel sRGB is left out, since it would transfer-code an alpha in green. */
export const formats = {
  R8_UNORM: { name: 'R8_UNORM', vkFormat: 9, channels: 1, depth: 8, transfer: 'linear' },
  R8_SRGB: { name: 'R8_SRGB', vkFormat: 15, channels: 1, depth: 8, transfer: 'srgb' },
  RG8_UNORM: { name: 'RG8_UNORM', vkFormat: 16, channels: 2, depth: 8, transfer: 'linear' },
  RGB8_UNORM: { name: 'RGB8_UNORM', vkFormat: 23, channels: 3, depth: 8, transfer: 'linear' },
  RGB8_SRGB: { name: 'RGB8_SRGB', vkFormat: 29, channels: 3, depth: 8, transfer: 'srgb' },
  RGBA8_UNORM: { name: 'RGBA8_UNORM', vkFormat: 37, channels: 4, depth: 8, transfer: 'linear' },
  RGBA8_SRGB: { name: 'RGBA8_SRGB', vkFormat: 43, channels: 4, depth: 8, transfer: 'srgb' },
  R16_UNORM: { name: 'R16_UNORM', vkFormat: 70, channels: 1, depth: 16, transfer: 'linear' },
  RG16_UNORM: { name: 'RG16_UNORM', vkFormat: 77, channels: 2, depth: 16, transfer: 'linear' },
  RGBA16_UNORM: { name: 'RGBA16_UNORM', vkFormat: 91, channels: 4, depth: 16, transfer: 'linear' },
} as const satisfies Record<string, Ktx2Format>;

/** What one stored channel is filled with: a channel of the raster, or its largest code. */
export type Lane = 0 | 1 | 2 | 3 | 'max';

/** How a raster is laid into texels. */
export interface Ktx2Layout {
  readonly format: Ktx2Format;
  /** One for each channel of the format. */
  readonly lanes: readonly Lane[];
  /** What the raster must hold. `linear-light`: 16-bit color whose transfer has been taken off, alpha aside, because no
   *  16-bit format says sRGB. `codes`: the treatment's codes as they are. */
  readonly holds: 'codes' | 'linear-light';
  /** Component mapping that makes one red channel a gray color again. [KTX2, "KTXswizzle"] */
  readonly swizzle: 'rrr1' | null;
}

export interface TexelMeaning {
  readonly content: Content;
  /** Of the raster. */
  readonly channels: ChannelCount;
  readonly depth: Depth;
  /** Of the color channels; asked for where content is color. */
  readonly transfer: Transfer;
  /** `none` stores full alpha whatever the raster holds. */
  readonly alpha: AlphaUse;
  /** Channels that a normal is stored in. */
  readonly normalCount: 2 | 3;
  /** `wide` gives color four channels; `same` keeps 8-bit gray and RGB as they are. */
  readonly format: 'same' | 'wide';
}

/** The layout for what texels mean. A packed file is `data`, or `color` where its first channels are color.
 *  Throws RangeError for a normal of fewer channels than it is stored in. */
export function layoutKtx2(meaning: TexelMeaning): Ktx2Layout {
  switch (meaning.content) {
    case 'color':
      return layoutColor(meaning);
    case 'data':
    case 'height':
      return layoutData(meaning);
    case 'normal':
      return layoutNormal(meaning);
    default:
      return assertNever(meaning.content);
  }
}

function layoutColor(meaning: TexelMeaning): Ktx2Layout {
  const { channels, depth, transfer } = meaning;
  if (depth === 16) {
    const holds = transfer === 'srgb' ? 'linear-light' : 'codes';
    return { format: formats.RGBA16_UNORM, lanes: wideLanes(meaning), holds, swizzle: null };
  }
  const coding = transfer === 'srgb' ? 'SRGB' : 'UNORM';
  if (meaning.format === 'same' && channels === 1) {
    return { format: formats[`R8_${coding}`], lanes: [0], holds: 'codes', swizzle: 'rrr1' };
  }
  if (meaning.format === 'same' && channels === 3) {
    return { format: formats[`RGB8_${coding}`], lanes: [0, 1, 2], holds: 'codes', swizzle: null };
  }
  return { format: formats[`RGBA8_${coding}`], lanes: wideLanes(meaning), holds: 'codes', swizzle: null };
}

/** Data is handed to the shader as the codes say. */
function layoutData(meaning: TexelMeaning): Ktx2Layout {
  const { channels, depth } = meaning;
  const last = meaning.alpha === 'none' ? 'max' : 1;
  if (channels === 1) return plainLayout(formats[`R${depth}_UNORM`], [0]);
  if (channels === 2) return plainLayout(formats[`RG${depth}_UNORM`], [0, last]);
  return plainLayout(formats[`RGBA${depth}_UNORM`], wideLanes(meaning));
}

function layoutNormal(meaning: TexelMeaning): Ktx2Layout {
  const { channels, depth, normalCount } = meaning;
  if (channels < normalCount) {
    throw new RangeError(`Expected integer ${normalCount}..4 for channels of a normal but received ${channels}`);
  }
  if (normalCount === 2) return plainLayout(formats[`RG${depth}_UNORM`], [0, 1]);
  return plainLayout(formats[`RGBA${depth}_UNORM`], wideLanes(meaning));
}

function plainLayout(format: Ktx2Format, lanes: readonly Lane[]): Ktx2Layout {
  return { format, lanes, holds: 'codes', swizzle: null };
}

/** Red, green, blue, alpha: gray three times, and full alpha where there is none or it has no use. */
function wideLanes({ channels, alpha }: TexelMeaning): readonly Lane[] {
  const opaque = alpha === 'none' || channels === 1 || channels === 3;
  if (channels <= 2) return [0, 0, 0, opaque ? 'max' : 1];
  return [0, 1, 2, opaque ? 'max' : 3];
}

function assertNever(value: never): never {
  throw new TypeError(`Expected a content but received ${String(value)}`);
}
