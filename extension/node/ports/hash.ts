import { createHash } from 'node:crypto';
import type { Hash } from '../../../core/port.ts';

/** SHA-256 by Node's crypto. */
export function newHash(): Hash {
  const hash = createHash('sha256');
  return {
    update(bytes) {
      hash.update(bytes);
    },
    hex: () => hash.digest('hex'),
  };
}
