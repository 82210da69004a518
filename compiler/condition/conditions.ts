import { AddedGates } from '../circuit/addedGates.js';
import type { Circuit } from '../circuit/circuit.js';
import type { NetId } from '../circuit/ids.js';
import { Diagnostics } from '../diagnostics/diagnostics.js';
import { Source } from '../diagnostics/source.js';
import { SourceMap } from '../diagnostics/sourceMap.js';
import { NameTable } from '../read/names.js';
import { lowerTruth } from '../read/verilog/behaviour/index.js';
import { Budget, BudgetExceeded } from '../read/verilog/budget.js';
import type { GateSink } from '../read/verilog/scope.js';
import { checkCondition } from './checkCondition.js';
import { CircuitScope } from './circuitScope.js';
import { parseCondition } from './parseCondition.js';

/** A circuit together with gates for conditions over its nets. */
export interface WatchedConditions {
  /** Nets of the circuit given keep their numbers, and all that it does. */
  readonly circuit: Circuit;
  /** For each condition a net that is 1 where it holds. */
  readonly nets: readonly number[];
}

/** How conditions are read. */
export interface ConditionOptions {
  readonly threeValued: boolean;
  /** Stands in messages in place of the name of a file. */
  readonly name: string;
}

/**
 * Adds gates to a circuit for conditions over its nets: expressions of IEEE 1364-2005 (clause 5)
 * with hierarchical names, in the standard's widths and signs.
 *
 * A condition holds as that of an `if` does (9.4): where it is not 0, and known. z counts as x. In a
 * two-valued circuit what the standard makes x, as a division by 0, is 0. Throws `InputError`.
 */
export function addConditions(
  circuit: Circuit,
  texts: readonly string[],
  { threeValued, name }: ConditionOptions,
): WatchedConditions {
  const gates = new AddedGates(circuit, threeValued);
  const diagnostics = new Diagnostics();
  const nets = texts.map((text) =>
    conditionNet(circuit, gates, new Source(name, text), diagnostics),
  );
  diagnostics.throwIfErrors();
  return { circuit: gates.finish(), nets };
}

function conditionNet(
  circuit: Circuit,
  gates: AddedGates,
  source: Source,
  diagnostics: Diagnostics,
): NetId {
  const nothing = -1 as NetId;
  const names = new NameTable();
  const sources = new SourceMap();
  const found = new Diagnostics();
  const expression = parseCondition(source, names, sources, found);
  const budget = new Budget(source.bytes.length);
  const builder = looking(gates);
  const shared = { builder, names, sources, diagnostics: found, budget, initialValues: new Map() };
  const scope = new CircuitScope(circuit, shared);
  if (expression !== undefined) checkCondition(expression, scope, found);
  let net = nothing;
  if (expression !== undefined && !found.hasErrors) {
    try {
      net = lowerTruth(expression, scope);
    } catch (error) {
      if (!(error instanceof BudgetExceeded) || !('start' in error.place)) throw error;
      const { start, end } = error.place;
      found.add('design-too-large', error.message, sources.span(start, end));
    }
  }
  // What a netlist is only warned of, a select of bits that are not there, never holds.
  for (const { code, severity, message, span } of found.list) {
    if (severity === 'error') diagnostics.add(code, message, span);
    else diagnostics.add('range-invalid', `${message}; mend its numbers`, span);
  }
  return net;
}

// Expressions make gates; what processes make is not among them.
function looking(gates: AddedGates): GateSink {
  const never = (): never => {
    throw new Error('assertion: a condition drives no net');
  };
  return {
    looksAt: gates.looksAt,
    at: () => undefined,
    net: never,
    isDriven: () => true,
    kindOf: (net) => gates.kindOf(net),
    drive: never,
    gate: (kind, fanin) => gates.gate(kind, fanin),
    register: never,
    latch: never,
    readMemory: (memory, address) => gates.readMemory(memory, address),
    writeMemory: never,
  };
}
