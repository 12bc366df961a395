// culori brings no types of its own; these are the parts that the tests use.
declare module 'culori' {
  interface Rgb {
    readonly mode: 'rgb';
    readonly r: number;
    readonly g: number;
    readonly b: number;
  }
  export function converter(mode: 'lrgb'): (color: Rgb) => { r: number; g: number; b: number };
  export function converter(mode: 'oklab'): (color: Rgb) => { l: number; a: number; b: number };
  export function differenceEuclidean(mode: 'oklab'): (one: Rgb, other: Rgb) => number;
}
