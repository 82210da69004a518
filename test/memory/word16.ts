/** Instructions of the processor in `modules/word16.v`. */
const field = (value: number, bits: number, at: number): number => (value & (2 ** bits - 1)) << at;
const three = (op: number, fn: number) => (d: number, a: number, b: number) =>
  field(op, 4, 12) | field(d, 3, 9) | field(a, 3, 6) | field(b, 3, 3) | fn;
const six = (op: number) => (d: number, a: number, imm: number) =>
  field(op, 4, 12) | field(d, 3, 9) | field(a, 3, 6) | field(imm, 6, 0);
const nine = (op: number) => (d: number, imm: number) =>
  field(op, 4, 12) | field(d, 3, 9) | field(imm, 9, 0);

export const ops = {
  add: three(0, 0),
  sub: three(0, 1),
  and: three(0, 2),
  or: three(0, 3),
  xor: three(0, 4),
  shl: three(0, 5),
  shr: three(0, 6),
  less: three(0, 7),
  addi: six(1),
  ld: six(2),
  st: six(3),
  ldi: nine(4),
  lui: nine(5),
  bz: nine(6),
  bnz: nine(7),
  jal: nine(8),
  jr: (d: number) => nine(9)(d, 0),
  in: (d: number) => nine(10)(d, 0),
  out: (d: number) => nine(11)(d, 0),
  halt: () => field(15, 4, 12),
} as const;

/** What the processor does, instruction by instruction. */
export class Word16 {
  readonly memory = new Uint16Array(32768);
  readonly registers = new Uint16Array(8);
  readonly out: number[] = [];
  pc = 0;
  cycles = 0;
  halted = false;

  constructor(program: readonly number[]) {
    this.memory.set(program);
  }

  step(inPort: number): void {
    const ir = this.memory[this.pc]!;
    this.pc = (this.pc + 1) & 0x7fff;
    this.cycles += 2;
    const r = this.registers;
    const [d, a, b] = [(ir >> 9) & 7, (ir >> 6) & 7, (ir >> 3) & 7];
    const imm6 = ((ir & 63) << 26) >> 26;
    const imm9 = ((ir & 511) << 23) >> 23;
    const at = (r[a]! + imm6) & 0x7fff;
    const target = (this.pc + imm9) & 0x7fff;
    switch (ir >> 12) {
      case 0:
        r[d] = this.#alu(ir & 7, r[a]!, r[b]!);
        break;
      case 1:
        r[d] = r[a]! + imm6;
        break;
      case 2:
        r[d] = this.memory[at]!;
        break;
      case 3:
        this.memory[at] = r[d]!;
        break;
      case 4:
        r[d] = imm9;
        break;
      case 5:
        r[d] = ((ir & 511) << 7) | (r[d]! & 127);
        break;
      case 6:
        if (r[d] === 0) this.pc = target;
        break;
      case 7:
        if (r[d] !== 0) this.pc = target;
        break;
      case 8:
        r[d] = this.pc;
        this.pc = target;
        break;
      case 9:
        this.pc = r[d]! & 0x7fff;
        break;
      case 10:
        r[d] = inPort;
        break;
      case 11:
        this.out.push(r[d]!);
        break;
      case 15:
        this.halted = true;
        break;
      default:
    }
  }

  #alu(fn: number, p: number, q: number): number {
    const shift = q & 15;
    const results = [p + q, p - q, p & q, p | q, p ^ q, p << shift, p >> shift, p < q ? 1 : 0];
    return results[fn]!;
  }
}

/** A program as `$readmemh` reads it, with the words of `at` behind their address. */
export const hexText = (
  program: readonly number[],
  at: ReadonlyMap<number, number[]> = new Map(),
) =>
  [
    '// A program.',
    ...program.map((word) => word.toString(16).padStart(4, '0')),
    ...[...at].flatMap(([address, words]) => [
      `@${address.toString(16)} /* data */`,
      words.map((word) => word.toString(16)).join(' '),
    ]),
  ].join('\n');
