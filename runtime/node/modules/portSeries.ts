import type { ModelLayout, PortLayout } from '../../layout.js';
import { anyBit, readBits } from '../../rowBits.js';
import type { RunBlock } from '../../stream.js';
import { portValue, type SeenValue } from './portValues.js';

/**
 * The values of a port, one a cycle: a `Uint32Array` up to 32 bits, a `BigUint64Array` up to 64,
 * else an array of bigints; a plain array where a bit of any of them is x, with a text for it.
 */
export type PortSeries = Uint32Array | BigUint64Array | readonly SeenValue[];

/** The inputs of a block of cycles by name, taken out of the packed rows when they are asked for. */
export class InputSeries {
  /** An object with a property for each input port. */
  readonly byName: Readonly<Record<string, PortSeries>>;
  readonly #layout: ModelLayout;
  #block: RunBlock | undefined;

  constructor(layout: ModelLayout) {
    this.#layout = layout;
    const byName: Record<string, PortSeries> = {};
    for (const port of layout.inputs.ports) {
      const reader = new SeriesReader(port);
      const get = () => reader.of(this.#block!, this.#layout);
      Object.defineProperty(byName, port.name, { enumerable: true, get });
    }
    this.byName = byName;
  }

  /** Goes to a block. */
  goTo(block: RunBlock): void {
    this.#block = block;
  }
}

/** Reads one port; arrays are used again, values are read once a block. */
class SeriesReader {
  readonly #port: PortLayout;
  #block: RunBlock | undefined;
  #series: PortSeries = [];
  #words = new Uint32Array(0);
  #longs = new BigUint64Array(0);

  constructor(port: PortLayout) {
    this.#port = port;
  }

  of(block: RunBlock, layout: ModelLayout): PortSeries {
    if (this.#block !== block) {
      this.#block = block;
      this.#series = this.#read(block, layout);
    }
    return this.#series;
  }

  #read(block: RunBlock, { inputs, threeValued }: ModelLayout): PortSeries {
    const { cycles, stimulus, stimulusStride } = block;
    const port = this.#port;
    const unknownAt = (at: number) => (threeValued ? at + inputs.words : undefined);
    if ((!threeValued || !this.#hasUnknown(block, inputs.words)) && port.width <= 64) {
      return port.width <= 32 ? this.#readWords(block) : this.#readLongs(block);
    }
    return Array.from({ length: cycles }, (_, i) => {
      const at = i * stimulusStride;
      return portValue(port, stimulus, at, unknownAt(at));
    });
  }

  #hasUnknown({ cycles, stimulus, stimulusStride }: RunBlock, toUnknown: number): boolean {
    const { offset, width } = this.#port;
    for (let i = 0; i < cycles; i++) {
      if (anyBit(stimulus, i * stimulusStride + toUnknown, offset, width)) return true;
    }
    return false;
  }

  #readWords({ cycles, stimulus, stimulusStride }: RunBlock): Uint32Array {
    const { offset, width } = this.#port;
    if (this.#words.length < cycles) this.#words = new Uint32Array(cycles);
    for (let i = 0; i < cycles; i++) {
      this.#words[i] = readBits(stimulus, i * stimulusStride, offset, width);
    }
    return this.#words.subarray(0, cycles);
  }

  #readLongs({ cycles, stimulus, stimulusStride }: RunBlock): BigUint64Array {
    if (this.#longs.length < cycles) this.#longs = new BigUint64Array(cycles);
    for (let i = 0; i < cycles; i++) {
      const value = portValue(this.#port, stimulus, i * stimulusStride, undefined);
      this.#longs[i] = BigInt(value);
    }
    return this.#longs.subarray(0, cycles);
  }
}
