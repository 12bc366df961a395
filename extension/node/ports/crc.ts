import * as zlib from 'node:zlib';
import { type Crc32, crc32 as plainCrc32 } from '../../../core/codec/crc.ts';

/** CRC-32 by Node's zlib where it gives one, from Node 20.15 on: ten times as fast. */
export const crc32: Crc32 = (zlib as { readonly crc32?: Crc32 }).crc32 ?? plainCrc32;
