import type { WasmModel } from './wasmModel.js';

const GROUP = 16;

/** What a module that compares its state exports beside the rest; see `compareState` of the compiler. */
export interface MarkExports {
  readonly memory: WebAssembly.Memory;
  readonly current: WebAssembly.Global<'i32'>;
  readonly untilCompare: WebAssembly.Global<'i32'>;
  readonly comparePace: WebAssembly.Global<'i32'>;
  readonly marked: WebAssembly.Global<'i32'>;
  readonly markMask: WebAssembly.Global<'i32'>;
  readonly matched: WebAssembly.Global<'i32'>;
}

/** A copy of the state inside a module's memory, which the module looks for while it runs. */
export class StateMark {
  readonly #exports: MarkExports;
  readonly #bytes: number;
  readonly #address: number;

  /** Takes `markBytes(model)` bytes from `address` on. */
  constructor(model: WasmModel, exports: MarkExports, address: number) {
    this.#exports = exports;
    this.#bytes = groupedBytes(model);
    this.#address = address;
    const mask = new Uint8Array(exports.memory.buffer, address + this.#bytes, this.#bytes);
    // What fills a group of neighbours holds anything.
    model.states.forEach(({ role }, bit) => {
      mask[bit] = role === 'unused' ? 0 : 1;
    });
    exports.marked.value = address;
    exports.markMask.value = address + this.#bytes;
  }

  /** Whether the last call of the module ended because it came to the state. Forgets that it did. */
  takeMatch(): boolean {
    const isMatch = this.#exports.matched.value === 1;
    this.#exports.matched.value = 0;
    return isMatch;
  }

  /** Looks for the present state from now on, every `pace` cycles. */
  set(pace: number): void {
    const { memory, current, untilCompare, comparePace } = this.#exports;
    const bytes = new Uint8Array(memory.buffer);
    bytes.copyWithin(this.#address, current.value, current.value + this.#bytes);
    untilCompare.value = pace;
    comparePace.value = pace;
    this.takeMatch();
  }

  /** Looks for nothing any more. */
  clear(): void {
    this.#exports.untilCompare.value = 0;
  }
}

/** Bytes that a `StateMark` takes: the state and a mask of it. */
export const markBytes = (model: WasmModel): number => 2 * groupedBytes(model);

const groupedBytes = ({ states }: WasmModel): number => Math.ceil(states.length / GROUP) * GROUP;
