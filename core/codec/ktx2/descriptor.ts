import { maxCode } from '../../raster/raster.ts';
import type { Ktx2Format } from './format.ts';
import { type Ktx2Level, texelBytes } from './texels.ts';

/** The basic descriptor block of a format whose blocks are single texels, in the field names that the container's writer
 *  takes. [KDFS14, "Khronos Basic Data Format Descriptor Block"] */
export function describeFormat(format: Ktx2Format, kind: Ktx2Level['kind']): Descriptor {
  const { channels, depth, transfer } = format;
  return {
    vendorId: VENDOR_KHRONOS,
    descriptorType: TYPE_BASIC,
    versionNumber: VERSION,
    colorModel: MODEL_RGBSDA,
    colorPrimaries: PRIMARIES_BT709,
    transferFunction: TRANSFERS[transfer],
    flags: FLAGS[kind],
    // Each less one.
    texelBlockDimension: [0, 0, 0, 0],
    bytesPlane: [texelBytes(format), 0, 0, 0, 0, 0, 0, 0],
    samples: Array.from({ length: channels }, (_, channel) => ({
      bitOffset: channel * depth,
      // Less one.
      bitLength: depth - 1,
      channelType: channelType(channel, transfer),
      samplePosition: [0, 0, 0, 0],
      sampleLower: 0,
      sampleUpper: maxCode(depth),
    })),
  };
}

interface Descriptor {
  vendorId: number;
  descriptorType: number;
  versionNumber: number;
  colorModel: number;
  colorPrimaries: number;
  transferFunction: number;
  flags: number;
  texelBlockDimension: [number, number, number, number];
  bytesPlane: [number, number, number, number, number, number, number, number];
  samples: {
    bitOffset: number;
    bitLength: number;
    channelType: number;
    samplePosition: number[];
    sampleLower: number;
    sampleUpper: number;
  }[];
}

// Values of KDFS14's tables of the same names.
const VENDOR_KHRONOS = 0;
const TYPE_BASIC = 0;
const VERSION = 2;
const MODEL_RGBSDA = 1;
const PRIMARIES_BT709 = 1;
const TRANSFERS = { linear: 1, srgb: 2 } as const;
const FLAGS = { straight: 0, premultiplied: 1 } as const;

/** The first three channels are red, green and blue. */
const CHANNEL_ALPHA = 15;

/** Qualifier of a sample that the transfer function does not touch. */
const QUALIFIER_LINEAR = 0x10;

/** Alpha says that it is linear where color is not. */
function channelType(channel: number, transfer: Ktx2Format['transfer']): number {
  if (channel < 3) return channel;
  return transfer === 'srgb' ? CHANNEL_ALPHA | QUALIFIER_LINEAR : CHANNEL_ALPHA;
}
