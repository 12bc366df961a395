import type { Crc32 } from './codec/crc.ts';
import type { Tokens } from './codec/deflate/tokens.ts';
import type { RowFilters } from './codec/png/filters.ts';
import type { Engine } from './resample/engine.ts';

// What the platform must give. core calls nothing else of the outside world.

/** Why a zlib stream could not be read to its end. */
export type InflateFault = 'corrupt' | 'truncated' | 'surplus';

/** Thrown by an `Inflate` port. `surplus` means compressed bytes after the stream's own end. */
export class InflateError extends Error {
  readonly fault: InflateFault;

  constructor(fault: InflateFault) {
    super(`zlib stream is ${fault}`);
    this.name = 'InflateError';
    this.fault = fault;
  }
}

/** Reads one zlib stream (RFC 1950) given in pieces, in order, and yields what it holds, in order, in pieces of any size.
 *  Yields at most `limit + 1` bytes in all and then ends, so a caller sees "one byte too many" without ever paying for
 *  more. Throws InflateError. Yielded pieces belong to the receiver. */
export type Inflate = (pieces: Iterable<Uint8Array>, limit: number) => AsyncIterable<Uint8Array>;

export interface DeflateHints {
  /** zlib level 1..9. */
  readonly level: number;
}

/** Writes one zlib stream (RFC 1950) of the pieces, in order. A piece is valid until the next one is asked for, so what is kept
 *  of it is copied. The hints may be ignored where the platform has none; the encoder fingerprint tells. */
export type Deflate = (pieces: Iterable<Uint8Array>, hints: DeflateHints) => AsyncIterable<Uint8Array>;

/** SHA-256, fed in pieces. */
export interface Hash {
  update(bytes: Uint8Array): void;
  /** Lower-case hexadecimal, 64 digits. Ends the hash. */
  hex(): string;
}

export interface Cancel {
  readonly cancelled: boolean;
}

/** Thrown where work ends because it was asked to. Nothing is wrong. */
export class Cancelled extends Error {
  constructor() {
    super('cancelled');
    this.name = 'Cancelled';
  }
}

/** What reading and writing PNG is done by; plain code where one is left out. The bytes are the same. */
export interface PngTools {
  /** Undoes and chooses row filters. */
  readonly filters?: RowFilters;
  /** Finds and writes what our own deflate is made of. */
  readonly tokens?: Tokens;
  readonly crc32?: Crc32;
}

export interface Ports extends PngTools {
  /** Makes the rows of chains; the plain engine where it is left out. The pixels are the same. */
  readonly engine?: Engine;
  readonly inflate: Inflate;
  readonly deflate: Deflate;
  readonly newHash: () => Hash;
}

export interface FileEntry {
  /** Name in its folder, as the file system spells it. */
  readonly name: string;
  /** A link is named by what it leads to; `lost` leads nowhere. */
  readonly kind: 'file' | 'folder' | 'file-link' | 'folder-link' | 'lost' | 'other';
}

/** A read-only look at a file system. Paths are absolute and "/"-separated (`/a/b` or `C:/a/b`). A missing or unreadable
 *  file is `null`, never an exception. */
export interface FileTree {
  list(folder: string): Promise<readonly FileEntry[] | null>;
  read(path: string): Promise<Uint8Array | null>;
  /** The first `byteCount` bytes, fewer where the file is shorter. */
  readHead(path: string, byteCount: number): Promise<Uint8Array | null>;
  /** Whether it is a file or a folder, links followed. */
  kind(path: string): Promise<'file' | 'folder' | null>;
  /** The path with every link resolved, for the deepest part that exists. */
  realPath(path: string): Promise<string>;
}
