import { GateKind } from '../../circuit/gates.js';

/** What a gate word of the ISCAS'89 text form makes: a gate, a constant or a register. */
export interface GateWord {
  /** `GateKind.Register` for a D flip-flop. */
  readonly kind: GateKind;
  readonly minInputs: number;
  readonly maxInputs: number;
}

const gate = (kind: GateKind): GateWord => ({ kind, minInputs: 1, maxInputs: Number.MAX_VALUE });
const unary = (kind: GateKind): GateWord => ({ kind, minInputs: 1, maxInputs: 1 });
const constant = (kind: GateKind): GateWord => ({ kind, minInputs: 0, maxInputs: 0 });

/** The gate words, in upper case; a netlist may write them in any case. */
export const gateWords: ReadonlyMap<string, GateWord> = new Map([
  ['AND', gate(GateKind.And)],
  ['NAND', gate(GateKind.Nand)],
  ['OR', gate(GateKind.Or)],
  ['NOR', gate(GateKind.Nor)],
  ['XOR', gate(GateKind.Xor)],
  ['XNOR', gate(GateKind.Xnor)],
  ['NOT', unary(GateKind.Not)],
  ['INV', unary(GateKind.Not)],
  ['BUF', unary(GateKind.Buf)],
  ['BUFF', unary(GateKind.Buf)],
  ['DFF', unary(GateKind.Register)],
  ['CONST0', constant(GateKind.Zero)],
  ['CONST1', constant(GateKind.One)],
  ['GND', constant(GateKind.Zero)],
  ['VDD', constant(GateKind.One)],
]);
