import { type Kernel, moduleOf } from "./assembler.js";

/** What of the JavaScript interface to WebAssembly is used here: neither TypeScript's ES library nor Node's types have it. */
declare namespace WebAssembly {
  class Memory {
    constructor(size: { initial: number });
    readonly buffer: ArrayBuffer;
  }
  class Module {
    constructor(bytes: Uint8Array<ArrayBuffer>);
  }
  class Instance {
    constructor(module: Module, imports: { m: { m: Memory } });
    readonly exports: Record<string, (...values: number[]) => number>;
  }
}

const page = 65_536;
/** Arrays begin at multiples of so many bytes. */
const apart = 64;

/** Kernels that are translated when they are first wanted, once for all. */
export class Kernels<K extends string> {
  private module: WebAssembly.Module | undefined;

  constructor(private readonly write: () => readonly Kernel<K>[]) {}

  translated(): WebAssembly.Module {
    this.module ??= new WebAssembly.Module(moduleOf(this.write()));
    return this.module;
  }
}

/** Bytes that arrays take in a workspace. */
export const roomFor = ({ floats = [], ints = [] }: { floats?: readonly number[]; ints?: readonly number[] }): number =>
  floats.reduce((sum, n) => sum + 8 * n + apart, 0) + ints.reduce((sum, n) => sum + 4 * n + apart, 0);

/**
 * Memory that kernels reach, and ordinary typed arrays in it: `byteOffset` is their address. What is not touched takes no
 * room in the machine.
 */
export class Workspace {
  private readonly memory: WebAssembly.Memory;
  private used = 0;

  /** @throws RangeError beyond 4 GB */
  constructor(bytes: number) {
    this.memory = new WebAssembly.Memory({ initial: Math.ceil(bytes / page) + 1 });
  }

  /** All 0. */
  floats(length: number): Float64Array<ArrayBuffer> {
    return new Float64Array(this.memory.buffer, this.take(8 * length), length);
  }

  ints(length: number): Int32Array<ArrayBuffer> {
    return new Int32Array(this.memory.buffer, this.take(4 * length), length);
  }

  /** Addresses and numbers in, a number out (0 where a kernel gives none). */
  load<K extends string>(kernels: Kernels<K>): Readonly<Record<K, (...values: number[]) => number>> {
    return new WebAssembly.Instance(kernels.translated(), { m: { m: this.memory } }).exports as Record<
      K,
      (...values: number[]) => number
    >;
  }

  private take(bytes: number): number {
    const at = this.used;
    this.used += Math.ceil(bytes / apart) * apart;
    return at;
  }
}
