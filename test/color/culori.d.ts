// culori brings no types of its own; these are the parts that the tests use.
declare module 'culori' {
  export function converter(mode: 'lrgb'): (color: { mode: 'rgb'; r: number; g: number; b: number }) => {
    r: number;
    g: number;
    b: number;
  };
}
