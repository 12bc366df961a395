/** How a GPU format lays texels out: blocks of `width` x `height` texels, each `bytes` long. */
export interface GpuFormat {
  readonly width: number;
  readonly height: number;
  readonly bytes: number;
}

/** Formats that a budget may be counted in. Block extents and sizes are those of the registry.
 *  [Vulkan, vk.xml, `formats`: `blockSize`, `blockExtent`] */
export const gpuFormats = {
  rgba8: { width: 1, height: 1, bytes: 4 },
  rgba16: { width: 1, height: 1, bytes: 8 },
  bc1: { width: 4, height: 4, bytes: 8 },
  bc3: { width: 4, height: 4, bytes: 16 },
  bc4: { width: 4, height: 4, bytes: 8 },
  bc5: { width: 4, height: 4, bytes: 16 },
  bc7: { width: 4, height: 4, bytes: 16 },
  'etc2-rgb': { width: 4, height: 4, bytes: 8 },
  'etc2-rgba': { width: 4, height: 4, bytes: 16 },
  'eac-r11': { width: 4, height: 4, bytes: 8 },
  'eac-rg11': { width: 4, height: 4, bytes: 16 },
  'astc-4x4': { width: 4, height: 4, bytes: 16 },
  'astc-5x4': { width: 5, height: 4, bytes: 16 },
  'astc-5x5': { width: 5, height: 5, bytes: 16 },
  'astc-6x5': { width: 6, height: 5, bytes: 16 },
  'astc-6x6': { width: 6, height: 6, bytes: 16 },
  'astc-8x5': { width: 8, height: 5, bytes: 16 },
  'astc-8x6': { width: 8, height: 6, bytes: 16 },
  'astc-8x8': { width: 8, height: 8, bytes: 16 },
  'astc-10x5': { width: 10, height: 5, bytes: 16 },
  'astc-10x6': { width: 10, height: 6, bytes: 16 },
  'astc-10x8': { width: 10, height: 8, bytes: 16 },
  'astc-10x10': { width: 10, height: 10, bytes: 16 },
  'astc-12x10': { width: 12, height: 10, bytes: 16 },
  'astc-12x12': { width: 12, height: 12, bytes: 16 },
} as const satisfies Readonly<Record<string, GpuFormat>>;

/** Names for a budget's `format`: `written` is what the texture's KTX2 holds. */
export const budgetFormats = ['written', ...(Object.keys(gpuFormats) as (keyof typeof gpuFormats)[])] as const;

/** Bytes of images of these extents in a format; an image takes whole blocks. */
export function gpuBytes(extents: Iterable<readonly [number, number]>, format: GpuFormat): number {
  let bytes = 0;
  for (const [width, height] of extents) {
    bytes += Math.ceil(width / format.width) * Math.ceil(height / format.height) * format.bytes;
  }
  return bytes;
}
