import type { Ports } from '../../../core/port.ts';
import { crc32 } from './crc.ts';
import { deflate } from './deflate.ts';
import { newHash } from './hash.ts';
import { inflate } from './inflate.ts';

/** What core needs of Node. */
export const nodePorts: Ports = { inflate, deflate, newHash, crc32 };
