import { rowStride } from '../layout.js';
import type { WasmModel } from '../wasmModel.js';
import { Allowance } from './allowance.js';
import { RowIds } from './rowIds.js';
import { StateWords } from './stateWords.js';

/** Bytes of the entries: what a second-level cache holds, where a look-up still beats the logic. */
const ENTRIES_BYTES = 1 << 20;

/** Bytes of the response rows of entries, where a row is no single word. */
const ROWS_BYTES = 1 << 18;

const ENTRY_BYTES = 8;

/** Before the entries stands the address of the present state's ones. */
const HEAD_BYTES = 64;

/** What a module exports that can run by table; see `tableLoop` of the compiler. */
export interface TableExports {
  readonly memory: WebAssembly.Memory;
  readonly current: WebAssembly.Global<'i32'>;
  run(cycles: number, stimulus: number, step: number, response: number, stride: number): number;
  /** `place` is the address of the word that holds the present state's address. */
  runTable(
    cycles: number,
    stimulus: number,
    step: number,
    response: number,
    stride: number,
    place: number,
  ): number;
}

/** Bytes of memory that a `TableRunner` takes. */
export const tableBytes = ({ layout }: WasmModel): number =>
  HEAD_BYTES + ENTRIES_BYTES + (isOneWord(layout) ? 0 : ROWS_BYTES);

const isOneWord = ({ outputs, threeValued }: WasmModel['layout']): boolean =>
  rowStride(outputs, threeValued) <= 1;

/**
 * Runs a model whose state is small by a table of next states and responses, one look-up a cycle.
 *
 * The table starts empty. A cycle that has no entry is run by the straight-line code, which also
 * says what the entry is; so any state may be loaded, and none has to be found in advance. A cycle
 * without result never gets an entry. Where the table grows beyond its room or its entries are hardly
 * used, the straight-line code takes over.
 *
 * The state stands in the table or in the module's current area: call `leave` before looking at the
 * area, `forget` after writing to it.
 */
export class TableRunner {
  readonly #exports: TableExports;
  readonly #head: number;
  /** Of the entries. */
  readonly #address: number;
  readonly #areaSum: number;
  readonly #inputBits: number;
  readonly #rowBytes: number;
  readonly #capacity: number;
  readonly #stimulusWords: number;
  readonly #responseWords: number;
  readonly #words: StateWords;
  readonly #packed: Uint32Array;
  readonly #states: RowIds;
  readonly #rows: RowIds | undefined;
  readonly #allowance = new Allowance();
  #isOver = false;
  /** Number of the present state; -1 where it stands in the area alone. */
  #present = -1;
  /** Number of the state in the area, -1 where that is not known. */
  #inArea = -1;
  /** Address of the module's current area; asking the module takes long. */
  #area = -1;
  #memory = new Uint32Array(0);
  #bytes = new Uint8Array(0);

  /** Takes `tableBytes(model)` bytes from `address` on, a multiple of 64, which must be 0. */
  constructor(model: WasmModel, exports: TableExports, address: number) {
    const { inputs, outputs, threeValued } = model.layout;
    this.#exports = exports;
    this.#head = address;
    this.#address = address + HEAD_BYTES;
    this.#areaSum = model.memory.areas[0] + model.memory.areas[1];
    this.#inputBits = inputs.bits;
    this.#rowBytes = ENTRY_BYTES << inputs.bits;
    this.#capacity = Math.floor(ENTRIES_BYTES / this.#rowBytes);
    this.#stimulusWords = threeValued ? inputs.words : 0;
    this.#responseWords = rowStride(outputs, threeValued);
    this.#words = new StateWords(model);
    this.#packed = new Uint32Array(this.#words.width);
    this.#states = new RowIds(this.#words.width);
    if (!isOneWord(model.layout)) this.#rows = new RowIds(this.#responseWords);
  }

  /** Whether it has given up, its room being used up: all is straight-line code from now on. */
  get isOver(): boolean {
    return this.#isOver;
  }

  /** Whether the next cycles are looked up, rather than left to straight-line code for a while. */
  get isInUse(): boolean {
    return !this.#isOver && this.#allowance.rest === 0;
  }

  /** As the module's `run`, with the same results. */
  run(cycles: number, stimulus: number, step: number, response: number, stride: number): number {
    this.#look();
    for (let done = 0; done < cycles; ) {
      const row = stimulus + done * step;
      const to = response + done * stride;
      const left = cycles - done;
      const isStraight = this.#isOver || this.#allowance.rest > 0 || !this.#enter();
      if (isStraight) {
        const wanted = this.#isOver ? left : Math.min(left, this.#allowance.rest);
        const ran = this.#straight(wanted, row, step, to, stride);
        this.#allowance.pass(ran);
        done += ran;
        if (ran < wanted) return done;
        continue;
      }
      const found = this.#lookUp(left, row, step, to, stride);
      done += found;
      if (found === left) return done;
      if (!this.#make(row + found * step, to + found * stride)) return done;
      done++;
    }
    return cycles;
  }

  /** Sees to it that the module's current area holds the state. */
  leave(): void {
    if (this.#present < 0) return;
    this.#look();
    this.#write();
  }

  /** Takes the state from the module's current area, which has been written to. */
  forget(): void {
    this.#present = -1;
    this.#inArea = -1;
    this.#area = -1;
  }

  // Memory may have grown, and the module may have another current area.
  #look(): void {
    const { memory, current } = this.#exports;
    if (this.#memory.buffer !== memory.buffer) {
      this.#memory = new Uint32Array(memory.buffer);
      this.#bytes = new Uint8Array(memory.buffer);
    }
    if (this.#area < 0) this.#area = current.value;
  }

  #write(): void {
    if (this.#present < 0 || this.#present === this.#inArea) return;
    this.#words.unpack(this.#states.row(this.#present), this.#bytes, this.#area);
    this.#inArea = this.#present;
  }

  #straight(
    cycles: number,
    stimulus: number,
    step: number,
    response: number,
    stride: number,
  ): number {
    this.#write();
    const ran = this.#exports.run(cycles, stimulus, step, response, stride);
    if (ran % 2 === 1) this.#area = this.#areaSum - this.#area;
    this.#present = -1;
    this.#inArea = -1;
    return ran;
  }

  // Numbers the state in the area; false where there is no room for another one.
  #enter(): boolean {
    if (this.#present >= 0) return true;
    this.#words.pack(this.#memory, this.#area, this.#packed);
    const id = this.#states.idOf(this.#packed);
    if (id >= this.#capacity) {
      this.#isOver = true;
      return false;
    }
    this.#present = id;
    this.#inArea = id;
    return true;
  }

  #lookUp(
    cycles: number,
    stimulus: number,
    step: number,
    response: number,
    stride: number,
  ): number {
    const { runTable } = this.#exports;
    const place = this.#head >>> 2;
    this.#memory[place] = this.#address + this.#present * this.#rowBytes;
    const found = runTable(cycles, stimulus, step, response, stride, this.#head);
    this.#present = (this.#memory[place]! - this.#address) / this.#rowBytes;
    this.#allowance.earn(found);
    return found;
  }

  // Runs one cycle by straight-line code and makes an entry of it; false where it has no result.
  #make(row: number, response: number): boolean {
    const from = this.#present;
    if (this.#straight(1, row, 0, response, 0) === 0) return false;
    this.#allowance.spend();
    if (this.#enter()) this.#fill(from, row, response);
    return true;
  }

  #fill(from: number, row: number, response: number): void {
    const memory = this.#memory;
    const bits = this.#inputBits === 0 ? 0 : memory[row >>> 2]!;
    const mask = (1 << this.#inputBits) - 1;
    // Rows with an x have no place in the table.
    const isKnown = this.#stimulusWords === 0 || (memory[(row >>> 2) + 1]! & mask) === 0;
    if (!isKnown) return;
    const output = this.#outputOf(memory, response);
    if (output < 0) return;
    const entry = (this.#address + from * this.#rowBytes) / 4 + 2 * (bits & mask);
    memory[entry + 1] = output;
    memory[entry] = this.#address + this.#present * this.#rowBytes;
  }

  // What an entry says of the response: the row if it is a word, else the address of an equal one.
  #outputOf(memory: Uint32Array, response: number): number {
    const at = response >>> 2;
    if (this.#rows === undefined) return this.#responseWords === 0 ? 0 : memory[at]!;
    const id = this.#rows.idOf(memory.subarray(at, at + this.#responseWords));
    const bytes = 4 * this.#responseWords;
    if ((id + 1) * bytes > ROWS_BYTES) {
      this.#isOver = true;
      return -1;
    }
    const address = this.#address + ENTRIES_BYTES + id * bytes;
    memory.set(this.#rows.row(id), address / 4);
    return address;
  }
}
