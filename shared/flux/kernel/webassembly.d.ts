/** The part of the WebAssembly JavaScript API that the kernel needs; the full types come only with those of a browser. */
declare namespace WebAssembly {
  class Module {
    private constructor();
  }
  interface Instance {
    readonly exports: Readonly<Record<string, unknown>>;
  }
  interface Memory {
    readonly buffer: ArrayBuffer;
    grow(pages: number): number;
  }
  function compile(bytes: Uint8Array<ArrayBuffer>): Promise<Module>;
  function instantiate(module: Module, imports: object): Promise<Instance>;
}
