// Numbers as the proof's page and its sheet print them.

/** A share of 1 as percent with one decimal, two below 1 %. */
export function percent(share: number): string {
  const hundred = share * 100;
  return `${hundred !== 0 && Math.abs(hundred) < 1 ? hundred.toFixed(2) : hundred.toFixed(1)} %`;
}

/** A value of 0..1 to three decimals, without the leading zero, as tables of light are printed. */
export function light(value: number): string {
  return value.toFixed(3).replace(/^(-?)0\./, '$1.');
}

/** To at most `digits` decimals, trailing zeros left out. */
export function figure(value: number, digits = 2): string {
  return String(Number(value.toFixed(digits)));
}

/** Bytes in the largest unit of 1024 that leaves a number of 1 or more. */
export function byteText(count: number): string {
  if (count < 1024) return `${count} B`;
  if (count < 1024 * 1024) return `${figure(count / 1024, 1)} KiB`;
  return `${figure(count / 1024 / 1024, 1)} MiB`;
}

export function extentText({ width, height }: { readonly width: number; readonly height: number }): string {
  return `${width}×${height}`;
}
