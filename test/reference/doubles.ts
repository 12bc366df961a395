/** A whole image in double precision, channels interleaved, rows from the top. */
export interface Doubles {
  readonly width: number;
  readonly height: number;
  readonly channels: number;
  readonly values: Float64Array;
}

export function doubles(width: number, height: number, channels: number): Doubles {
  return { width, height, channels, values: new Float64Array(width * height * channels) };
}

/** The image with rows and columns exchanged. */
export function transposed(image: Doubles): Doubles {
  const result = doubles(image.height, image.width, image.channels);
  for (let y = 0; y < image.height; y++) {
    for (let x = 0; x < image.width; x++) {
      for (let c = 0; c < image.channels; c++) {
        result.values[(x * image.height + y) * image.channels + c] =
          image.values[(y * image.width + x) * image.channels + c];
      }
    }
  }
  return result;
}
