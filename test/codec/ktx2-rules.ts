import { inflateSync } from 'node:zlib';

// What a 2D texture of single texels must look like, written from the KTX File Format Specification 2.0 (sections named
// beside each rule) and the Khronos Data Format Specification 1.4, apart from the code under test.

export type Rule = (typeof rules)[number]['name'];

/** Names of the rules that a file breaks. A rule that cannot be applied because an earlier one is broken counts as broken. */
export function brokenRules(file: Uint8Array): Rule[] {
  return rules.filter((rule) => !holds(rule.check, file)).map((rule) => rule.name);
}

function holds(check: (file: Ktx2) => boolean, bytes: Uint8Array): boolean {
  try {
    return check(new Ktx2(bytes));
  } catch {
    return false;
  }
}

/** VkFormat: channels, bits, whether its name ends in SRGB. [Vulkan, "VkFormat"] */
const FORMATS = new Map<number, { name: string; channels: number; bits: number; srgb: boolean }>([
  [9, { name: 'R8_UNORM', channels: 1, bits: 8, srgb: false }],
  [15, { name: 'R8_SRGB', channels: 1, bits: 8, srgb: true }],
  [16, { name: 'R8G8_UNORM', channels: 2, bits: 8, srgb: false }],
  [23, { name: 'R8G8B8_UNORM', channels: 3, bits: 8, srgb: false }],
  [29, { name: 'R8G8B8_SRGB', channels: 3, bits: 8, srgb: true }],
  [37, { name: 'R8G8B8A8_UNORM', channels: 4, bits: 8, srgb: false }],
  [43, { name: 'R8G8B8A8_SRGB', channels: 4, bits: 8, srgb: true }],
  [70, { name: 'R16_UNORM', channels: 1, bits: 16, srgb: false }],
  [77, { name: 'R16G16_UNORM', channels: 2, bits: 16, srgb: false }],
  [91, { name: 'R16G16B16A16_UNORM', channels: 4, bits: 16, srgb: false }],
]);

class Ktx2 {
  readonly bytes: Uint8Array;
  private readonly view: DataView;

  constructor(bytes: Uint8Array) {
    this.bytes = bytes;
    this.view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  }

  u16(at: number): number {
    return this.view.getUint16(at, true);
  }

  u32(at: number): number {
    return this.view.getUint32(at, true);
  }

  u64(at: number): number {
    return Number(this.view.getBigUint64(at, true));
  }

  get format() {
    return FORMATS.get(this.u32(12))!;
  }

  get texelBytes(): number {
    return (this.format.channels * this.format.bits) / 8;
  }

  get scheme(): number {
    return this.u32(44);
  }

  get dfd(): { offset: number; length: number } {
    return { offset: this.u32(48), length: this.u32(52) };
  }

  get kvd(): { offset: number; length: number } {
    return { offset: this.u32(56), length: this.u32(60) };
  }

  get samples(): number[] {
    return Array.from({ length: (this.u16(this.dfd.offset + 10) - 24) / 16 }, (_, i) => this.dfd.offset + 28 + 16 * i);
  }

  /** From the largest, with the extent that each must have. */
  get levels() {
    return Array.from({ length: Math.max(1, this.u32(40)) }, (_, index) => ({
      offset: this.u64(80 + 24 * index),
      length: this.u64(88 + 24 * index),
      uncompressed: this.u64(96 + 24 * index),
      texels: Math.max(1, this.u32(20) >> index) * Math.max(1, this.u32(24) >> index),
    }));
  }

  /** Keys and values as latin text, values with whatever they end in, paddings apart. */
  get pairs(): { key: string; value: string; padding: Uint8Array }[] {
    const pairs = [];
    const end = this.kvd.offset + this.kvd.length;
    for (let at = this.kvd.offset; at < end; ) {
      const length = this.u32(at);
      const entry = this.bytes.subarray(at + 4, at + 4 + length);
      const nul = entry.indexOf(0);
      const next = at + 4 + Math.ceil(length / 4) * 4;
      if (nul < 1 || next > end) throw new Error('key/value runs over');
      const text = (part: Uint8Array) => Buffer.from(part).toString('latin1');
      pairs.push({
        key: text(entry.subarray(0, nul)),
        value: text(entry.subarray(nul + 1)),
        padding: this.bytes.subarray(at + 4 + length, next),
      });
      at = next;
    }
    return pairs;
  }

  value(key: string): string | undefined {
    return this.pairs.find((pair) => pair.key === key)?.value;
  }

  /** Of the level data: lcm(texel bytes, 4) where nothing is supercompressed, else 1. */
  get alignment(): number {
    return this.scheme === 0 ? [4, 4, 4, 12, 4, 0, 0, 0, 8][this.texelBytes] : 1;
  }

  /** Places between the parts that must be zero: before the smallest level and between levels. */
  get gaps(): { from: number; to: number }[] {
    const starts = [...this.levels].reverse();
    return starts.map(({ offset }, i) => ({
      from: i === 0 ? this.kvd.offset + this.kvd.length : starts[i - 1].offset + starts[i - 1].length,
      to: offset,
    }));
  }
}

const zero = (bytes: Uint8Array) => bytes.every((byte) => byte === 0);

const rules = [
  {
    // Identifier
    name: 'identifier',
    check: (file) =>
      Buffer.from(file.bytes.subarray(0, 12)).equals(
        Buffer.from([0xab, 0x4b, 0x54, 0x58, 0x20, 0x32, 0x30, 0xbb, 0x0d, 0x0a, 0x1a, 0x0a]),
      ),
  },
  // vkFormat: not prohibited, and one that we mean to write.
  { name: 'vkFormat', check: (file) => FORMATS.has(file.u32(12)) },
  // typeSize: bytes of one component of an unpacked format.
  { name: 'typeSize', check: (file) => file.u32(16) === file.format.bits / 8 },
  // pixelWidth, pixelHeight, pixelDepth, layerCount, faceCount: a 2D texture, neither array nor cube.
  {
    name: 'shape',
    check: (file) =>
      file.u32(20) > 0 && file.u32(24) > 0 && file.u32(28) === 0 && file.u32(32) === 0 && file.u32(36) === 1,
  },
  // levelCount: at most floor(log2(max side)) + 1; we never leave level building to the loader (0).
  {
    name: 'levelCount',
    check: (file) => file.u32(40) >= 1 && 2 ** (file.u32(40) - 1) <= Math.max(file.u32(20), file.u32(24)),
  },
  // supercompressionScheme: none or ZLIB.
  { name: 'scheme', check: (file) => file.scheme === 0 || file.scheme === 3 },
  // supercompressionGlobalData: none, so offset and length 0.
  { name: 'global data', check: (file) => file.u64(64) === 0 && file.u64(72) === 0 },
  // dfdByteOffset and dfdTotalSize: behind the level index, up to the key/values.
  {
    name: 'dfd place',
    check: (file) =>
      file.dfd.offset === 80 + 24 * file.levels.length &&
      file.u32(file.dfd.offset) === file.dfd.length &&
      file.dfd.length === file.kvd.offset - file.dfd.offset,
  },
  // KDF 1.4 "Basic Data Format Descriptor Block": vendor, type, version 2, size.
  {
    name: 'dfd block',
    check: (file) =>
      file.u32(file.dfd.offset + 4) === 0 &&
      file.u16(file.dfd.offset + 8) === 2 &&
      file.u16(file.dfd.offset + 10) === file.dfd.length - 4 &&
      file.samples.length === file.format.channels,
  },
  // Color model RGBSDA, primaries BT709.
  {
    name: 'dfd color',
    check: (file) => file.bytes[file.dfd.offset + 12] === 1 && file.bytes[file.dfd.offset + 13] === 1,
  },
  // "transferFunction": *_SRGB formats must say sRGB, the others must not where they have an sRGB sibling; ours are linear.
  {
    name: 'dfd transfer',
    check: (file) => file.bytes[file.dfd.offset + 14] === (file.format.srgb ? 2 : 1),
  },
  // Flags: straight 0, premultiplied 1; there is nothing to multiply without alpha.
  {
    name: 'dfd flags',
    check: (file) => {
      const flags = file.bytes[file.dfd.offset + 15];
      return flags === 0 || (flags === 1 && file.format.channels === 4);
    },
  },
  // texelBlockDimension 0 0 0 0 (less one each), bytesPlane0 one texel, no other planes.
  {
    name: 'dfd block size',
    check: (file) =>
      file.u32(file.dfd.offset + 16) === 0 &&
      file.u32(file.dfd.offset + 20) === file.texelBytes &&
      file.u32(file.dfd.offset + 24) === 0,
  },
  // Samples in order, whole channels, UNORM range, position 0. Alpha is channel 15, linear (0x10) under a transfer.
  {
    name: 'dfd samples',
    check: (file) => {
      const { channels, bits, srgb } = file.format;
      return file.samples.every(
        (at, index) =>
          file.u16(at) === index * bits &&
          file.bytes[at + 2] === bits - 1 &&
          file.bytes[at + 3] === (channels === 4 && index === 3 ? 15 + (srgb ? 0x10 : 0) : index) &&
          file.u32(at + 4) === 0 &&
          file.u32(at + 8) === 0 &&
          file.u32(at + 12) === 2 ** bits - 1,
      );
    },
  },
  // kvdByteOffset 4-aligned; lengths of the entries sum to kvdByteLength; offset 0 where there is none.
  {
    name: 'kvd place',
    check: (file) =>
      file.kvd.length === 0
        ? file.kvd.offset === 0
        : file.kvd.offset % 4 === 0 && file.pairs.length > 0 && file.kvd.length % 4 === 0,
  },
  // Keys unique and sorted by code point; padding 0; reserved keys only those that the specification defines.
  {
    name: 'kvd keys',
    check: (file) => {
      const keys = file.pairs.map((pair) => pair.key);
      return (
        keys.every((key, i) => i === 0 || keys[i - 1] < key) &&
        keys.every((key) => !/^ktx/i.test(key) || ['KTXorientation', 'KTXswizzle', 'KTXwriter'].includes(key)) &&
        file.pairs.every((pair) => zero(pair.padding))
      );
    },
  },
  // KTXorientation of a 2D texture; rd is what rasters mean.
  { name: 'orientation', check: (file) => file.value('KTXorientation') === 'rd\0' },
  // KTXwriter: who wrote it, NUL-terminated.
  { name: 'writer', check: (file) => /^Sizeproof algorithm \d+\0$/.test(file.value('KTXwriter') ?? '') },
  // KTXswizzle: four of rgba01, of channels that exist.
  {
    name: 'swizzle',
    check: (file) =>
      new RegExp(`^[${'rgba'.slice(0, file.format.channels)}01]{4}\0$`).test(file.value('KTXswizzle') ?? 'r001\0'),
  },
  // Level index: smallest level first, aligned, nothing but the least zero padding between, up to the end of the file.
  {
    name: 'level places',
    check: (file) =>
      file.gaps.every(
        ({ from, to }) =>
          to === Math.ceil(from / file.alignment) * file.alignment && zero(file.bytes.subarray(from, to)),
      ) && file.levels[0].offset + file.levels[0].length === file.bytes.length,
  },
  // uncompressedByteLength: rows tightly packed; byteLength equals it without supercompression.
  {
    name: 'level lengths',
    check: (file) =>
      file.levels.every(
        ({ length, uncompressed, texels }) =>
          uncompressed === texels * file.texelBytes && (file.scheme === 0 ? length === uncompressed : length > 0),
      ),
  },
  // Scheme 3: each level is one RFC 1950 stream that ends where the level ends.
  {
    name: 'level streams',
    check: (file) =>
      file.scheme !== 3 ||
      file.levels.every(({ offset, length, uncompressed }) => {
        const { buffer, engine } = inflateSync(file.bytes.subarray(offset, offset + length), {
          info: true,
        }) as unknown as {
          buffer: Uint8Array;
          engine: { bytesWritten: number };
        };
        return buffer.length === uncompressed && engine.bytesWritten === length;
      }),
  },
] as const satisfies readonly { name: string; check: (file: Ktx2) => boolean }[];

export const ruleNames: readonly Rule[] = rules.map((rule) => rule.name);
