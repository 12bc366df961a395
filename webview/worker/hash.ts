import { sha256 } from '@noble/hashes/sha2';
import type { Hash } from '../../core/port.ts';

/** SHA-256 in plain JavaScript: the platform's own is neither synchronous nor fed in pieces. */
export function newHash(): Hash {
  const hash = sha256.create();
  return {
    update(bytes) {
      hash.update(bytes);
    },
    hex: () => Array.from(hash.digest(), (byte) => byte.toString(16).padStart(2, '0')).join(''),
  };
}
