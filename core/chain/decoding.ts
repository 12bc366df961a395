import { srgbEncoder } from '../color/encoder.ts';
import { power } from '../color/portable.ts';
import { decodeTable, encodeSrgb } from '../color/transfer.ts';
import { type Codes, type Depth, maxCode, newCodes } from '../raster/raster.ts';
import type { Layout, Role } from '../resample/encoding.ts';
import type { Decoding } from '../resample/engine.ts';

/** The tables that turn a layout's codes into kernel light: color 0..1 (or code units where it is not transfer-coded),
 *  alpha and numbers in code units, normals -1..1, roughness as alpha^2 = r^4. */
export function decodingOf(layout: Layout): Decoding {
  const { depth, channels, alpha, weighted, normals } = layout;
  return {
    depth,
    channels,
    tables: layout.roles.map((role) => tableOf(role, depth, layout.gamma)),
    alpha: weighted.length > 0 ? alpha : null,
    weighted,
    normals,
  };
}

function tableOf(role: Role, depth: Depth, gamma: number | null): Float32Array {
  switch (role.kind) {
    case 'color':
      if (gamma === null || role.stored === 'linear') return decodeTable(depth, role.transfer);
      if (role.transfer === 'srgb') return madeTable(`gamma${gamma}`, depth, (share) => power(share, 1 / gamma));
      return madeTable(`code${gamma}`, depth, (share) => encodeSrgb(power(share, 1 / gamma)) * maxCode(depth));
    case 'plain':
    case 'opacity':
    case 'unused':
      return decodeTable(depth, 'linear');
    case 'normal':
      return madeTable('normal', depth, (share) => share * 2 - 1);
    case 'roughness':
      return madeTable('roughness', depth, (share) => share * share * (share * share));
  }
}

/** The sRGB code of depth `to`, of the same light, for each code of depth `from` that was encoded with `gamma`. */
export function recodeTable(from: Depth, to: Depth, gamma: number): Codes {
  const encoder = srgbEncoder(to);
  const codes = newCodes(to, maxCode(from) + 1);
  for (let code = 0; code < codes.length; code++) codes[code] = encoder.codeOf(power(code / maxCode(from), 1 / gamma));
  return codes;
}

function madeTable(kind: string, depth: Depth, of: (share: number) => number): Float32Array {
  const key = `${kind} ${depth}`;
  let table = tables.get(key);
  if (table === undefined) {
    const max = maxCode(depth);
    table = Float32Array.from({ length: max + 1 }, (_, code) => of(code / max));
    tables.set(key, table);
  }
  return table;
}

const tables = new Map<string, Float32Array>();
