import { passingCode } from '../../../core/chain/coverage.ts';
import type { Picture } from '../../../core/proof/want.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { BACKDROPS, CHECKER_SIDE } from '../prints/backdrop.ts';
import { shaderOf } from '../prints/view.ts';
import type { State } from '../state/state.ts';

/** Paints a picture, or the middle of it, one texel a device pixel, into a canvas of its own size. */
export function paintThumb(
  canvas: HTMLCanvasElement,
  picture: Picture,
  treatment: Treatment,
  { backdrop }: Pick<State, 'backdrop'>,
  most: { readonly width: number; readonly height: number },
): void {
  const { width, height } = picture.extent;
  const extent = { width: Math.min(width, most.width), height: Math.min(height, most.height) };
  const left = Math.floor((width - extent.width) / 2);
  const top = Math.floor((height - extent.height) / 2);
  canvas.width = extent.width;
  canvas.height = extent.height;
  const ratio = window.devicePixelRatio;
  canvas.style.width = `${extent.width / ratio}px`;
  canvas.style.height = `${extent.height / ratio}px`;
  const context = canvas.getContext('2d');
  if (context === null) return;
  const image = new ImageData(extent.width, extent.height);
  const shade = shaderOf(
    {
      // A mask is looked at as it is tested; everything else as it is.
      show: treatment.alpha.use === 'mask' && picture.meaning.alpha !== null ? 'mask' : 'color',
      metric: 'oklab',
      blend: treatment.view.blend,
      passing: passingCode(treatment.alpha, picture.depth),
      normalY: treatment.normal.y,
      lamp: { x: 0, y: 0 },
    },
    picture,
    null,
  );
  const colors = BACKDROPS[backdrop];
  const side = Math.max(1, Math.round((CHECKER_SIDE / 2) * ratio));
  const out = [0, 0, 0];
  for (let y = 0, at = 0; y < extent.height; y++) {
    for (let x = 0; x < extent.width; x++, at += 4) {
      const square = (Math.floor(x / side) + Math.floor(y / side)) % colors.length;
      shade((top + y) * width + left + x, colors[square], out);
      image.data[at] = out[0];
      image.data[at + 1] = out[1];
      image.data[at + 2] = out[2];
      image.data[at + 3] = 255;
    }
  }
  context.putImageData(image, 0, 0);
}
