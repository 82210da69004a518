import { RunFault } from '../../runtime/engine.js';
import { UPDATE_WIDTH } from '../logic/logic.js';
import {
  FIRST_INPUT,
  firstResult,
  firstState,
  type Program,
  ProgramOp,
} from '../program/program.js';
import { bytecodeOf } from './bytecode.js';
import type { BytecodeMemory } from './bytecodeMemory.js';

/** A program as bytecode, with the values it works on. */
export class BytecodeProgram {
  readonly #program: Program;
  readonly #runs: Uint32Array;
  /**
   * The values, then the operands of all operations. In one array, because the engine below checks
   * and looks up each array again in each turn of a loop.
   */
  readonly #memory: Int32Array;
  readonly #firstOperand: number;
  readonly #outputs: Uint32Array;
  readonly #next: Uint32Array;
  readonly #faults: Uint32Array;
  readonly #committed: Int32Array;
  /** State bits that stand in no update. */
  readonly #single: Uint32Array;
  /** Per update: first state bit, the memory places of enable and gate, and of what is copied. */
  readonly #updates: Int32Array;
  readonly #contents: BytecodeMemory;
  readonly #writes: readonly (() => void)[];

  constructor(program: Program, contents: BytecodeMemory) {
    const { runs, operands, renumbered } = bytecodeOf(program);
    this.#program = program;
    this.#runs = runs;
    this.#firstOperand = renumbered.length;
    this.#memory = new Int32Array(renumbered.length + operands.length);
    this.#memory[1] = 1;
    this.#memory.set(operands, renumbered.length);
    this.#outputs = program.outputs.map((value) => renumbered[value]!);
    this.#next = program.next.map((value) => renumbered[value]!);
    this.#faults = Uint32Array.from(program.faults, ({ when }) => renumbered[when]!);
    this.#committed = new Int32Array(program.stateCount);
    this.#single = singleBits(program);
    this.#updates = Int32Array.from(
      program.updates.flatMap(({ first, enable, gate, from }) => [
        first,
        renumbered[enable]!,
        renumbered[gate]!,
        from < 0 ? -1 : firstState(program) + from,
      ]),
    );
    this.#contents = contents;
    this.#writes = program.writes.map((write) =>
      contents.writer(write, this.#memory, (value) => renumbered[value]!),
    );
  }

  /** The state bits as they stand, to read and to write. */
  get stateBits(): Int32Array {
    const first = firstState(this.#program);
    return this.#memory.subarray(first, first + this.#program.stateCount);
  }

  /**
   * Runs one cycle with the stimulus row at word `from` of `stimulus`, and writes the response row
   * to word `to` of `response`. Throws RunFault, with `cycle`, where the cycle has no result.
   */
  run(
    cycle: number,
    stimulus: Uint32Array,
    from: number,
    response: Uint32Array | undefined,
    to: number,
  ): void {
    this.#loadInputs(stimulus, from);
    this.#step();
    this.#checkFaults(cycle);
    if (response !== undefined) this.#packOutputs(response, to);
    // What is written is read before the state changes.
    for (const write of this.#writes) write();
    this.#commit();
  }

  #loadInputs(stimulus: Uint32Array, at: number): void {
    const memory = this.#memory;
    const count = this.#program.inputCount;
    for (let bit = 0; bit < count; bit++) {
      memory[FIRST_INPUT + bit] = (stimulus[at + (bit >>> 5)]! >>> (bit & 31)) & 1;
    }
  }

  #step(): void {
    const memory = this.#memory;
    const runs = this.#runs;
    let at = this.#firstOperand;
    let result = firstResult(this.#program);
    for (let run = 0; run < runs.length; run += 2) {
      const end = result + runs[run + 1]!;
      switch (runs[run]) {
        case ProgramOp.And:
          for (; result < end; result++, at += 2) {
            memory[result] = memory[memory[at]!]! & memory[memory[at + 1]!]!;
          }
          break;
        case ProgramOp.Or:
          for (; result < end; result++, at += 2) {
            memory[result] = memory[memory[at]!]! | memory[memory[at + 1]!]!;
          }
          break;
        case ProgramOp.Xor:
          for (; result < end; result++, at += 2) {
            memory[result] = memory[memory[at]!]! ^ memory[memory[at + 1]!]!;
          }
          break;
        case ProgramOp.Not:
          for (; result < end; result++, at++) memory[result] = memory[memory[at]!]! ^ 1;
          break;
        case ProgramOp.Pack:
        case ProgramOp.Load:
        case ProgramOp.Bit:
          at = this.#words(runs[run]!, at, result, end);
          result = end;
          break;
        default:
          // Without a branch, which would be mispredicted half the time.
          for (; result < end; result++, at += 3) {
            const zero = memory[memory[at + 1]!]!;
            const difference = zero ^ memory[memory[at + 2]!]!;
            memory[result] = zero ^ (memory[memory[at]!]! & difference);
          }
      }
    }
  }

  // Numbers, words and bits of words; returns where the next operands stand.
  #words(op: number, first: number, from: number, end: number): number {
    const memory = this.#memory;
    const { bytes } = this.#contents;
    let at = first;
    for (let result = from; result < end; result++) {
      const a = memory[memory[at]!]!;
      if (op === ProgramOp.Pack) {
        memory[result] = memory[memory[at + 1]!]! * 2 + a;
        at += 2;
      } else if (op === ProgramOp.Load) {
        memory[result] = this.#contents.word(memory[at + 2]!, a, memory[memory[at + 1]!] !== 0);
        at += 3;
      } else {
        const bit = memory[at + 1]!;
        memory[result] = (bytes[a + (bit >>> 3)]! >>> (bit & 7)) & 1;
        at += 2;
      }
    }
    return at;
  }

  #packOutputs(response: Uint32Array, at: number): void {
    const outputs = this.#outputs;
    const memory = this.#memory;
    for (let first = 0; first < outputs.length; first += 32) {
      const end = Math.min(first + 32, outputs.length);
      let word = 0;
      for (let bit = first; bit < end; bit++) word |= memory[outputs[bit]!]! << (bit - first);
      response[at + (first >>> 5)] = word;
    }
  }

  #commit(): void {
    const next = this.#next;
    const memory = this.#memory;
    const committed = this.#committed;
    const single = this.#single;
    for (let i = 0; i < single.length; i++) committed[single[i]!] = memory[next[single[i]!]!]!;
    for (let at = 0; at < this.#updates.length; at += 4) this.#update(at);
    memory.set(committed, firstState(this.#program));
  }

  #update(at: number): void {
    const memory = this.#memory;
    const committed = this.#committed;
    const first = this.#updates[at]!;
    const gate = -(memory[this.#updates[at + 2]!]! & 1);
    const from = this.#updates[at + 3]!;
    if ((memory[this.#updates[at + 1]!]! & 1) === 0) {
      const old = firstState(this.#program) + first;
      for (let i = 0; i < UPDATE_WIDTH; i++) committed[first + i] = memory[old + i]! & gate;
    } else if (from >= 0) {
      for (let i = 0; i < UPDATE_WIDTH; i++) committed[first + i] = memory[from + i]! & gate;
    } else {
      const next = this.#next;
      for (let i = 0; i < UPDATE_WIDTH; i++) {
        committed[first + i] = memory[next[first + i]!]! & gate;
      }
    }
  }

  #checkFaults(cycle: number): void {
    const fault = this.#faults.findIndex((value) => this.#memory[value] !== 0);
    if (fault >= 0) throw new RunFault(cycle, this.#program.faults[fault]!);
  }
}

function singleBits({ stateCount, states, updates }: Program): Uint32Array {
  const isUpdated = new Uint8Array(stateCount);
  for (const { first } of updates) isUpdated.fill(1, first, first + UPDATE_WIDTH);
  return Uint32Array.from(states.keys()).filter(
    (bit) => isUpdated[bit] === 0 && states[bit]!.role !== 'unused',
  );
}
