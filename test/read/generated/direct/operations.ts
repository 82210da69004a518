import { GateKind } from '../../../../compiler/circuit/gates.js';
import type { Operator } from '../design/model.js';
import type { Bits, WordLogic } from './wordLogic.js';

type Build = (logic: WordLogic, pieces: readonly Bits[], value: number) => Bits;

const of = (kind: GateKind): Build => {
  return (logic, [a, b]) => logic.each(kind, a!, b!);
};
const folded = (kind: GateKind): Build => {
  return (logic, [a]) => [logic.gate(kind, a!)];
};
const gate = (kind: GateKind): Build => {
  return (logic, pieces) => [
    logic.gate(
      kind,
      pieces.map((bits) => bits[0]!),
    ),
  ];
};
const not = (build: Build): Build => {
  return (logic, pieces, value) => logic.not(build(logic, pieces, value));
};
const swapped = (build: Build): Build => {
  return (logic, [a, b], value) => build(logic, [b!, a!], value);
};
const mux: Build = (logic, [select, one, zero]) => logic.mux(select![0]!, one!, zero!);
const less: Build = (logic, [a, b]) => [logic.less(a!, b!)];
const equal: Build = (logic, [a, b]) => [
  logic.gate(GateKind.Nor, logic.each(GateKind.Xor, a!, b!)),
];
// With its sign bit turned a signed number is as far from the least one as an unsigned one is.
const lessSigned: Build = (logic, pieces) => {
  const turned = pieces.map((bits) => [...bits.slice(0, -1), ...logic.not(bits.slice(-1))]);
  return less(logic, turned, 0);
};
const truth = (logic: WordLogic, bits: Bits) => logic.gate(GateKind.Or, bits);
const logical = (kind: GateKind): Build => {
  return (logic, [a, b]) => [logic.gate(kind, [truth(logic, a!), truth(logic, b!)])];
};
/** A divisor never is 0: its lowest bit is taken for 1. */
const division = (what: 'quotient' | 'remainder'): Build => {
  return (logic, [a, b]) => logic.divide(a!, [logic.one, ...b!.slice(1)])[what];
};

/** How the nets of each operator's result are made of those of its pieces, bit 0 first. */
export const buildOf: Readonly<Record<Operator, Build>> = {
  copy: (logic, [a]) => a!.map((net) => logic.gate(GateKind.Buf, [net])),
  constant: (logic, _pieces, value) => logic.constant(value, 6),
  not: (logic, [a]) => logic.not(a!),
  and: of(GateKind.And),
  or: of(GateKind.Or),
  xor: of(GateKind.Xor),
  xnor: of(GateKind.Xnor),
  mux,
  add: (logic, [a, b]) => logic.add(a!, b!, logic.zero).sum,
  subtract: (logic, [a, b]) => logic.subtract(a!, b!),
  negate: (logic, [a]) => logic.subtract(logic.constant(0, a!.length), a!),
  multiply: (logic, [a, b]) => logic.multiply(a!, b!),
  divide: division('quotient'),
  remainder: division('remainder'),
  square: (logic, [a]) => logic.multiply(a!, a!),
  shiftLeft: (logic, [a, b]) => logic.shift(a!, b!, true, logic.zero),
  shiftRight: (logic, [a, b]) => logic.shift(a!, b!, false, logic.zero),
  shiftSigned: (logic, [a, b]) => logic.shift(a!, b!, false, a!.at(-1)!),
  allOf: folded(GateKind.And),
  notAllOf: folded(GateKind.Nand),
  anyOf: folded(GateKind.Or),
  noneOf: folded(GateKind.Nor),
  parity: folded(GateKind.Xor),
  notParity: folded(GateKind.Xnor),
  logicalNot: folded(GateKind.Nor),
  logicalAnd: logical(GateKind.And),
  logicalOr: logical(GateKind.Or),
  equal,
  unequal: not(equal),
  same: equal,
  notSame: not(equal),
  less,
  notMore: not(swapped(less)),
  more: swapped(less),
  notLess: not(less),
  lessSigned,
  notLessSigned: not(lessSigned),
  join: (_logic, [a, b]) => [...b!, ...a!],
  repeat: (_logic, [a], value) => new Array<Bits>(value).fill(a!).flat(),
  bitOf: (logic, [a, b]) => [logic.bitOf(a!, b!)],
  gateAnd: gate(GateKind.And),
  gateNand: gate(GateKind.Nand),
  gateOr: gate(GateKind.Or),
  gateNor: gate(GateKind.Nor),
  gateXor: gate(GateKind.Xor),
  gateXnor: gate(GateKind.Xnor),
  gateBuf: gate(GateKind.Buf),
  gateNot: gate(GateKind.Not),
  bus: mux,
  wiredAnd: of(GateKind.And),
  wiredOr: of(GateKind.Or),
  pulledUp: (logic, [select, one]) => logic.mux(select![0]!, one!, logic.constant(-1, one!.length)),
  pulledDown: (logic, [select, one]) =>
    logic.mux(select![0]!, one!, logic.constant(0, one!.length)),
};
