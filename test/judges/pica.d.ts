// pica brings no types of its own; these are the parts that the tests use.
declare module 'pica' {
  export default class Pica {
    constructor(options?: { features?: readonly string[] });
    resizeBuffer(options: {
      src: Uint8Array;
      width: number;
      height: number;
      toWidth: number;
      toHeight: number;
      filter: string;
      unsharpAmount?: number;
    }): Promise<Uint8Array>;
  }
}
