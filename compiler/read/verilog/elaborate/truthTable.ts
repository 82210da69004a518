import { GateKind } from '../../../circuit/gates.js';
import type { NetId } from '../../../circuit/ids.js';
import type { GateSink } from '../scope.js';

/**
 * A function of a few inputs as its column of 0 and 1: character i is the value where bit k of i
 * is the value of input k.
 */
export type TruthTable = string;

/** What makes the gates of a function. */
type GateMaker = Pick<GateSink, 'gate'>;

/** The table of a function of `inputs` inputs. */
export function truthTable(inputs: number, valueAt: (levels: number) => boolean): TruthTable {
  return Array.from({ length: 1 << inputs }, (_, i) => (valueAt(i) ? '1' : '0')).join('');
}

/** The table where one input has a fixed value, of the inputs without it. */
export function cofactor(table: TruthTable, input: number, value: number): TruthTable {
  const run = 1 << input;
  let result = '';
  for (let i = value * run; i < table.length; i += 2 * run) result += table.slice(i, i + run);
  return result;
}

/** Whether a function depends on an input. */
export const dependsOn = (table: TruthTable, input: number): boolean =>
  cofactor(table, input, 0) !== cofactor(table, input, 1);

/** Builds a function out of gates by Shannon expansion; `inputs[k]` is the net of input k. */
export function buildTruthTable(
  table: TruthTable,
  inputs: readonly NetId[],
  sink: GateMaker,
): NetId {
  return new Expansion(sink).build(table, inputs);
}

class Expansion {
  readonly #sink: GateMaker;
  readonly #made = new Map<string, NetId>();

  constructor(sink: GateMaker) {
    this.#sink = sink;
  }

  build(table: TruthTable, inputs: readonly NetId[]): NetId {
    if (!table.includes('1')) return this.#sink.gate(GateKind.Zero, []);
    if (!table.includes('0')) return this.#sink.gate(GateKind.One, []);
    const key = `${table} ${inputs.join()}`;
    const known = this.#made.get(key);
    if (known !== undefined) return known;
    const net = this.#expand(table, inputs);
    this.#made.set(key, net);
    return net;
  }

  #expand(table: TruthTable, inputs: readonly NetId[]): NetId {
    const input = splitInput(table, inputs.length);
    const rest = inputs.filter((_, i) => i !== input);
    const zero = cofactor(table, input, 0);
    const one = cofactor(table, input, 1);
    const select = inputs[input]!;
    if (zero === one) return this.build(zero, rest);
    if (isConstant(zero, '0')) {
      return isConstant(one, '1') ? select : this.#gate(GateKind.And, select, one, rest);
    }
    if (isConstant(one, '1')) return this.#gate(GateKind.Or, select, zero, rest);
    if (zero === inverse(one)) {
      if (isConstant(zero, '1')) return this.#sink.gate(GateKind.Not, [select]);
      return this.#gate(GateKind.Xor, select, zero, rest);
    }
    if (isConstant(one, '0')) return this.#gate(GateKind.And, this.#not(select), zero, rest);
    if (isConstant(zero, '1')) return this.#gate(GateKind.Or, this.#not(select), one, rest);
    const whenZero = this.build(zero, rest);
    const whenOne = this.build(one, rest);
    return this.#sink.gate(GateKind.Mux, [select, whenZero, whenOne]);
  }

  #gate(kind: GateKind, select: NetId, table: TruthTable, rest: readonly NetId[]): NetId {
    return this.#sink.gate(kind, [select, this.build(table, rest)]);
  }

  #not(net: NetId): NetId {
    return this.build('10', [net]);
  }
}

/**
 * An input whose values leave the least: the same, an inverse, a constant on one side; and then what
 * depends on the fewest other inputs.
 */
function splitInput(table: TruthTable, inputs: number): number {
  let best = 0;
  let bestCost = Number.MAX_VALUE;
  for (let input = 0; input < inputs; input++) {
    const cost = splitCost(cofactor(table, input, 0), cofactor(table, input, 1), inputs);
    if (cost < bestCost) {
      best = input;
      bestCost = cost;
    }
  }
  return best;
}

function splitCost(zero: TruthTable, one: TruthTable, inputs: number): number {
  if (zero === one) return 0;
  if (zero === inverse(one)) return 1;
  const sides = [zero, one];
  const constants = sides.filter((side) => isConstant(side, '0') || isConstant(side, '1')).length;
  let left = 0;
  for (const side of sides) {
    for (let input = 0; input < inputs - 1; input++) if (dependsOn(side, input)) left++;
  }
  return (4 - constants) * 2 * inputs + left;
}

const isConstant = (table: TruthTable, value: string): boolean =>
  !table.includes(value === '0' ? '1' : '0');

const inverse = (table: TruthTable): TruthTable =>
  [...table].map((value) => (value === '0' ? '1' : '0')).join('');
