import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type Pica from 'pica';
import type Sharp from 'sharp';
import type { Extent, StraightRaster } from '../../core/raster/raster.ts';

/** Another library that can make an image smaller again and again. */
export interface Peer {
  readonly name: string;
  /** Every level below the image, each from the one before, in bytes: none of them hands floats on. */
  chain(image: StraightRaster, levels: readonly Extent[]): Promise<readonly Uint8Array[]>;
}

/** Peers by name; RGBA of 8 bits. */
export async function openPeers(): Promise<ReadonlyMap<string, Peer>> {
  const peers: Peer[] = [
    sharpPeer('sharp linear', 'scrgb'),
    sharpPeer('sharp code space', null),
    picaPeer(),
    await jsquashPeer(),
    await jimpPeer(),
  ];
  return new Map(peers.map((peer) => [peer.name, peer]));
}

// The bundle lies in dist; what only tests need is installed in the room of the tests.
const require = createRequire(join(process.cwd(), 'test/package.json'));

/** sharp with nothing kept from call to call. Its threads are those of an operation, beside the pool that runs operations. */
export function openSharp(threads: number): typeof Sharp {
  const sharp: typeof Sharp = require('sharp');
  sharp.cache(false);
  sharp.concurrency(threads);
  return sharp;
}

/** In linear light (scRGB, floats, color weighed by alpha), or in the codes as they are. */
function sharpPeer(name: string, space: 'scrgb' | null): Peer {
  return {
    name,
    async chain(image, levels) {
      const sharp = openSharp(1);
      const made: Uint8Array[] = [];
      let from: { codes: Uint8Array; extent: Extent } = { codes: image.codes as Uint8Array, extent: image.extent };
      for (const extent of levels) {
        let work = sharp(from.codes, { raw: { ...from.extent, channels: 4 } });
        if (space !== null) work = work.pipelineColourspace(space);
        work = work.resize(extent.width, extent.height, { kernel: 'lanczos3', fit: 'fill' });
        if (space !== null) work = work.toColourspace('srgb');
        from = { codes: await work.raw().toBuffer(), extent };
        made.push(from.codes);
      }
      return made;
    },
  };
}

function picaPeer(): Peer {
  const module: typeof Pica | { default: typeof Pica } = require('pica');
  const Maker = 'default' in module ? module.default : module;
  const pica = new Maker({ features: ['js', 'wasm'] });
  return {
    name: 'pica (code space)',
    async chain(image, levels) {
      const made: Uint8Array[] = [];
      let from: { codes: Uint8Array; extent: Extent } = { codes: image.codes as Uint8Array, extent: image.extent };
      for (const extent of levels) {
        const codes = await pica.resizeBuffer({
          src: from.codes,
          ...from.extent,
          toWidth: extent.width,
          toHeight: extent.height,
          filter: 'lanczos3',
          unsharpAmount: 0,
        });
        from = { codes, extent };
        made.push(codes);
      }
      return made;
    },
  };
}

/** It works on the pictures of a browser. */
interface Picture extends Extent {
  readonly data: Uint8ClampedArray;
}

async function jsquashPeer(): Promise<Peer> {
  const path = require.resolve('@jsquash/resize');
  const module: {
    initResize(wasm: WebAssembly.Module): Promise<unknown>;
    default(picture: Picture, options: object): Promise<Picture>;
  } = await import(pathToFileURL(path).href);
  class ImageData {
    constructor(
      readonly data: Uint8ClampedArray,
      readonly width: number,
      readonly height: number,
    ) {}
  }
  Object.assign(globalThis, { ImageData });
  const wasm = readFileSync(join(dirname(path), 'lib/resize/pkg/squoosh_resize_bg.wasm'));
  await module.initResize(new WebAssembly.Module(wasm));
  return {
    name: '@jsquash/resize linear',
    async chain({ codes, extent }, levels) {
      const made: Uint8Array[] = [];
      const clamped = new Uint8ClampedArray(codes.buffer as ArrayBuffer, codes.byteOffset, codes.byteLength);
      let from: Picture = new ImageData(clamped, extent.width, extent.height);
      for (const to of levels) {
        from = await module.default(from, { ...to, method: 'lanczos3', premultiply: true, linearRGB: true });
        made.push(new Uint8Array(from.data.buffer));
      }
      return made;
    },
  };
}

/** It has no Lanczos kernel: its bicubic one reads a third of the texels. */
async function jimpPeer(): Promise<Peer> {
  const { Jimp, ResizeStrategy }: typeof import('jimp') = require('jimp');
  return {
    name: 'jimp bicubic (code space)',
    async chain({ codes, extent }, levels) {
      const made: Uint8Array[] = [];
      const data = Buffer.from(codes.buffer, codes.byteOffset, codes.byteLength);
      let from = Jimp.fromBitmap({ data, ...extent });
      for (const { width: w, height: h } of levels) {
        from = from.clone();
        from.resize({ w, h, mode: ResizeStrategy.BICUBIC });
        made.push(from.bitmap.data);
      }
      return made;
    },
  };
}
