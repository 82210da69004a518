import { type Model, signed } from './circuits.js';

/** What an instruction does, by its operation; those of operations 0, 1 and 15 by function. */
interface Instruction {
  readonly op: number;
  readonly rd: number;
  readonly ra: number;
  readonly rb: number;
  readonly fn: number;
  readonly imm6: number;
  readonly imm9: number;
}

const decoded = (word: number): Instruction => ({
  op: word >> 12,
  rd: (word >> 9) & 7,
  ra: (word >> 6) & 7,
  rb: (word >> 3) & 7,
  fn: word & 7,
  imm6: signed(word, 6),
  imm9: signed(word, 9),
});

const LOAD = 7;
const isLoad = (word: number): boolean => word >> 12 === LOAD;

/** What a processor holds, and how each instruction changes it. */
class Machine {
  readonly registers = new Uint16Array(8);
  readonly memory = Uint16Array.from({ length: 32 }, (_, i) => (i << 8) | (~i & 0xff));
  pc = 0;
  carry = 0;
  out = 0;
  strobe = 0;
  halted = false;

  /** Executes an instruction that stands before `pc`. */
  execute(word: number, input: number): void {
    const i = decoded(word);
    const a = this.registers[i.ra]!;
    const b = this.registers[i.rb]!;
    const d = this.registers[i.rd]!;
    const result = this.#result(i, a, b, d, input);
    const at = (a + i.imm6) & 31;
    if (i.op === 8) this.memory[at] = d;
    if (result !== undefined) this.registers[i.rd] = result;
    if (isLoad(word)) this.registers[i.rd] = this.memory[at]!;
    const branches: Record<number, boolean> = {
      9: d === 0,
      10: d !== 0,
      11: signed(d, 16) < 0,
      12: signed(d, 16) > 0,
      13: true,
    };
    if (branches[i.op]) this.pc = (this.pc + i.imm9) & 255;
    else if (i.op === 14) this.pc = (a + i.imm6) & 255;
    if (i.op === 15 && i.fn === 0) this.halted = true;
    if (i.op === 15 && i.fn === 1) [this.out, this.strobe] = [a, 1];
  }

  /** The new value of register rd, undefined if it stays. */
  #result(i: Instruction, a: number, b: number, d: number, input: number): number | undefined {
    switch (i.op) {
      case 0:
        return this.#binary(i.fn, a, b);
      case 1:
        return unary(i.fn, a, b & 15);
      case 2:
        return this.#sum(a, i.imm6 & 0xffff);
      case 3:
        return a & (i.imm6 & 63);
      case 4:
        return a | (i.imm6 & 63);
      case 5:
        return i.imm9;
      case 6:
        return ((i.imm9 & 255) << 8) | (d & 255);
      case 13:
        return this.pc;
      case 15:
        return this.#special(i.fn, a, b, input);
      default:
        return undefined;
    }
  }

  #binary(fn: number, a: number, b: number): number {
    if (fn === 0) return this.#sum(a, b);
    if (fn === 1) return this.#difference(a, b);
    const others = [
      a & b,
      a | b,
      a ^ b,
      signed(a, 16) < signed(b, 16) ? 1 : 0,
      a < b ? 1 : 0,
      (a & 255) * (b & 255),
    ];
    return others[fn - 2]!;
  }

  #special(fn: number, a: number, b: number, input: number): number | undefined {
    const ordered = [a, b].sort((x, y) => signed(x, 16) - signed(y, 16));
    if (fn === 2) return input;
    if (fn === 3) return this.#sum(a, b + this.carry);
    if (fn === 4) return this.#difference(a, b + this.carry);
    return { 5: ordered[0], 6: this.carry, 7: ordered[1] }[fn];
  }

  #sum(a: number, b: number): number {
    this.carry = ((a + b) >> 16) & 1;
    return a + b;
  }

  #difference(a: number, b: number): number {
    this.carry = a < b ? 1 : 0;
    return a - b;
  }
}

function unary(fn: number, a: number, by: number): number {
  const ones = a.toString(2).replaceAll('0', '').length;
  const others = [
    a << by,
    a >> by,
    signed(a, 16) >> by,
    (a << by) | (a >> (16 - by)),
    ~a,
    -a,
    Math.min(ones, 15),
    (a >> 8) | (a << 8),
  ];
  return others[fn]!;
}

/**
 * The processor cycle by cycle: an instruction takes a cycle to fetch and one to execute, a load
 * one more. `program` gives the word at an address; without it, it comes with the inputs.
 */
export function processorModel(program?: (address: number) => number): Model {
  let machine = new Machine();
  let fetched: number | undefined;
  let loads = false;
  return ({ rst_n, instruction, in_port, probe }) => {
    if (!rst_n) {
      // Reset leaves the memories alone.
      const { registers, memory } = machine;
      machine = new Machine();
      machine.registers.set(registers);
      machine.memory.set(memory);
      fetched = undefined;
      loads = false;
    }
    const isExecuted = fetched !== undefined && (loads || !isLoad(fetched));
    const outputs = {
      pc: machine.pc,
      out_port: machine.out,
      out_strobe: machine.strobe,
      halted: machine.halted ? 1 : 0,
      retired: isExecuted && !machine.halted ? 1 : 0,
      probe_register: machine.registers[probe! & 7]!,
      probe_memory: machine.memory[probe!]!,
      probe_carry: machine.carry,
    };
    if (!rst_n) return outputs;
    machine.strobe = 0;
    if (machine.halted) return outputs;
    if (fetched === undefined) {
      fetched = program?.(machine.pc) ?? instruction!;
      machine.pc = (machine.pc + 1) & 255;
    } else if (!isExecuted) loads = true;
    else {
      machine.execute(fetched, in_port!);
      fetched = undefined;
      loads = false;
    }
    return outputs;
  };
}

/** Words of a program with labels: each line is a label, or an instruction that may use them. */
export type Line = string | ((to: (label: string) => number) => number);

/** Puts a program together; `to` gives a label's distance from behind the instruction. */
export function assembled(lines: readonly Line[]): number[] {
  const places = new Map<string, number>();
  const instructions: Exclude<Line, string>[] = [];
  for (const line of lines) {
    if (typeof line === 'string') places.set(line, instructions.length);
    else instructions.push(line);
  }
  return instructions.map((instruction, at) => instruction((label) => places.get(label)! - at - 1));
}

type Registers = (rd: number, ra: number, rb: number) => Line;
type Immediate = (rd: number, ra: number, value: number) => Line;
type Branch = (rd: number, label: string) => Line;

const registers =
  (op: number, fn: number): Registers =>
  (rd, ra, rb) =>
  () =>
    (op << 12) | (rd << 9) | (ra << 6) | (rb << 3) | fn;
const immediate =
  (op: number): Immediate =>
  (rd, ra, value) =>
  () =>
    (op << 12) | (rd << 9) | (ra << 6) | (value & 63);
const branch =
  (op: number): Branch =>
  (rd, label) =>
  (to) =>
    (op << 12) | (rd << 9) | (to(label) & 511);

/** The instructions that the programs use. */
export const ops = {
  add: registers(0, 0),
  sub: registers(0, 1),
  slt: registers(0, 5),
  addi: immediate(2),
  ldi:
    (rd: number, value: number): Line =>
    () =>
      (5 << 12) | (rd << 9) | (value & 511),
  ld: immediate(7),
  st: immediate(8),
  bz: branch(9),
  bnz: branch(10),
  bn: branch(11),
  jal: branch(13),
  jr: immediate(14),
  halt: registers(15, 0)(0, 0, 0),
  out: (ra: number): Line => registers(15, 1)(0, ra, 0),
  input: (rd: number): Line => registers(15, 2)(rd, 0, 0),
};
