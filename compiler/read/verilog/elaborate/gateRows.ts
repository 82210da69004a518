import { GateKind } from '../../../circuit/gates.js';
import type { builtinGates } from '../instances.js';

/** The word of a built-in gate or switch. */
export type GateWord = (typeof builtinGates)[number];

/** How a built-in gate becomes part of the circuit (IEEE 1364-2005, clause 7). */
export type GateRow =
  /** One output and then any number of inputs (clause 7.2). */
  | { readonly form: 'inputs'; readonly kind: GateKind }
  /** Any number of outputs and then one input (clause 7.3). */
  | { readonly form: 'outputs'; readonly kind: GateKind }
  /** Output, data, and the control, which is on at the level `on` (clause 7.4). */
  | { readonly form: 'enable'; readonly on: 0 | 1; readonly isInverted: boolean }
  /** Output, data, and one control, on at the level `on` (clause 7.5). */
  | { readonly form: 'switch'; readonly on: 0 | 1; readonly isResistive: boolean }
  /** Output, data, and a control of each kind (clause 7.7). */
  | { readonly form: 'pair'; readonly isResistive: boolean }
  /** Two terminals that are one net (clause 7.6). */
  | { readonly form: 'join' }
  /** Two terminals and a control, on at the level `on` (clause 7.6). */
  | { readonly form: 'twoWay'; readonly on: 0 | 1; readonly isResistive: boolean }
  /** One terminal that is this constant where nothing drives it (clause 7.8). */
  | { readonly form: 'pull'; readonly kind: GateKind };

const inputs = (kind: GateKind): GateRow => ({ form: 'inputs', kind });
const outputs = (kind: GateKind): GateRow => ({ form: 'outputs', kind });
const enable = (on: 0 | 1, isInverted: boolean): GateRow => ({ form: 'enable', on, isInverted });
const oneWay = (on: 0 | 1, isResistive: boolean): GateRow => ({ form: 'switch', on, isResistive });
const twoWay = (on: 0 | 1, isResistive: boolean): GateRow => ({ form: 'twoWay', on, isResistive });

/** The built-in gates, one row each. */
export const gateRows: Readonly<Record<GateWord, GateRow>> = {
  and: inputs(GateKind.And),
  nand: inputs(GateKind.Nand),
  or: inputs(GateKind.Or),
  nor: inputs(GateKind.Nor),
  xor: inputs(GateKind.Xor),
  xnor: inputs(GateKind.Xnor),
  buf: outputs(GateKind.Buf),
  not: outputs(GateKind.Not),
  bufif0: enable(0, false),
  bufif1: enable(1, false),
  notif0: enable(0, true),
  notif1: enable(1, true),
  nmos: oneWay(1, false),
  pmos: oneWay(0, false),
  cmos: { form: 'pair', isResistive: false },
  rnmos: oneWay(1, true),
  rpmos: oneWay(0, true),
  rcmos: { form: 'pair', isResistive: true },
  tran: { form: 'join' },
  rtran: { form: 'join' },
  tranif0: twoWay(0, false),
  tranif1: twoWay(1, false),
  rtranif0: twoWay(0, true),
  rtranif1: twoWay(1, true),
  pullup: { form: 'pull', kind: GateKind.One },
  pulldown: { form: 'pull', kind: GateKind.Zero },
};

const MANY = Number.MAX_VALUE;

/** How many terminals each form has, and how many of the first ones it drives. */
export const terminalsOf: Readonly<
  Record<
    GateRow['form'],
    {
      readonly least: number;
      readonly most: number;
      readonly text: string;
      readonly driven: (count: number) => number;
    }
  >
> = {
  inputs: { least: 2, most: MANY, text: 'an output and at least one input', driven: () => 1 },
  outputs: {
    least: 2,
    most: MANY,
    text: 'at least one output and an input',
    driven: (count) => count - 1,
  },
  enable: { least: 3, most: 3, text: 'an output, an input and a control', driven: () => 1 },
  switch: { least: 3, most: 3, text: 'an output, an input and a control', driven: () => 1 },
  pair: { least: 4, most: 4, text: 'an output, an input and two controls', driven: () => 1 },
  join: { least: 2, most: 2, text: 'two terminals', driven: () => 2 },
  twoWay: { least: 3, most: 3, text: 'two terminals and a control', driven: () => 2 },
  pull: { least: 1, most: 1, text: 'one terminal', driven: () => 1 },
};
