// The members of WebAssembly that core uses. The language's own library has none, the DOM's has them all.

declare namespace WebAssembly {
  class Module {
    // Two modules are never alike by shape.
    private readonly compiled: true;
    constructor(bytes: ArrayBufferView | ArrayBuffer);
  }

  class Memory {
    readonly buffer: ArrayBuffer;
    constructor(limits: { readonly initial: number; readonly maximum?: number });
    /** Adds pages of 64 KiB; every view of the old buffer is dead then. Throws RangeError where there are none. */
    grow(pages: number): number;
  }

  class Instance {
    readonly exports: unknown;
    constructor(module: Module, imports: { readonly [room: string]: { readonly [name: string]: Memory } });
  }
}
