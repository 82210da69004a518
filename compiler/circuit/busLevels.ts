import type { BusGates, Value } from './busGates.js';
import { NetType, Strength } from './busParts.js';
import { GateKind } from './gates.js';
import type { NetId } from './ids.js';

/** One of the things that may give a net its value: `data` while `enable` is 1. */
export interface Contribution {
  readonly data: NetId;
  readonly enable: Value;
  /** How strongly it drives 0 and 1. */
  readonly zero: Strength;
  readonly one: Strength;
}

/** What drives a net with one strength. */
export interface Level {
  readonly strength: Strength;
  readonly terms: readonly Contribution[];
  /** 1 while something drives with this strength. */
  readonly driven: Value;
}

/** The strengths that drive a net, the greatest first, down to one that always does. */
export function levelsOf(gates: BusGates, contributions: readonly Contribution[]): Level[] {
  const strengths = new Set(contributions.flatMap(({ zero, one }) => [zero, one]));
  strengths.delete(Strength.HighZ);
  const levels: Level[] = [];
  for (const strength of [...strengths].sort((a, b) => b - a)) {
    const terms = contributions.filter(({ zero, one }) => zero === strength || one === strength);
    const driven = gates.or(...terms.map((term) => drivenBy(gates, term, strength)));
    levels.push({ strength, terms, driven });
    if (gates.isOne(driven)) break;
  }
  return levels;
}

/** The value of a net, and when drivers of one strength give it different ones. */
export interface Resolved {
  readonly value: Value;
  readonly conflict: Value;
}

/**
 * Resolves a net from its levels (IEEE 1364-2005, clauses 4.6 and 7.10): the greatest strength
 * wins; where it drives 0 and 1 at once, a wired net is their and or or, any other net x.
 *
 * `floating` is the value while nothing drives; undefined where that does not matter.
 */
export function resolveLevels(
  gates: BusGates,
  type: NetType,
  levels: readonly Level[],
  floating: Value | undefined,
): Resolved {
  let value = floating;
  let conflict: Value = gates.zero;
  for (const level of [...levels].reverse()) {
    const lower = gates.isOne(level.driven) ? undefined : value;
    const hidden = gates.isZero(conflict) ? conflict : gates.and(conflict, gates.not(level.driven));
    const result = resolveLevel(gates, type, level, lower);
    value = result.value;
    conflict = gates.or(result.conflict, hidden);
  }
  return { value: value ?? gates.unknown, conflict };
}

function drivenBy(gates: BusGates, term: Contribution, strength: Strength): Value {
  if (term.zero === term.one) return term.enable;
  return term.one === strength
    ? gates.and(term.enable, term.data)
    : gates.and(term.enable, gates.not(term.data));
}

// Each form is exact where enables and data are x: `lower` shows through as far as nothing may
// hide it, and a value that all who may drive agree on is kept.
function resolveLevel(
  gates: BusGates,
  type: NetType,
  { strength, terms }: Level,
  lower: Value | undefined,
): Resolved {
  const conflict = gates.zero;
  const [{ data, enable }] = terms as [Contribution, ...Contribution[]];
  const isWhole = terms.every(({ zero, one }) => zero === one);
  if (terms.length === 1 && isWhole) {
    const value = lower === undefined ? data : gates.mux(enable, lower, data);
    return { value, conflict };
  }
  const isWired = type === NetType.And || type === NetType.Or;
  const isSteady = isWhole && terms.every((term) => gates.isOne(term.enable));
  if (isWired && isSteady) {
    const inputs = terms.map((term) => term.data);
    return { value: type === NetType.And ? gates.and(...inputs) : gates.or(...inputs), conflict };
  }
  const { zero, one } = railsOf(gates, strength, terms);
  if (type === NetType.And) {
    const raised = lower === undefined ? gates.one : gates.or(one, lower);
    return { value: gates.and(gates.not(zero), raised), conflict };
  }
  const shown = lower === undefined ? gates.zero : gates.and(lower, gates.not(zero));
  const value = gates.or(one, shown);
  if (type === NetType.Or) return { value, conflict };
  return withConflict(gates, value, gates.and(zero, one));
}

/** Whether something drives 0 with a strength, and whether something drives 1. */
function railsOf(gates: BusGates, strength: Strength, terms: readonly Contribution[]) {
  const zeros = terms.filter(({ zero }) => zero === strength);
  const ones = terms.filter(({ one }) => one === strength);
  return {
    zero: gates.or(...zeros.map(({ data, enable }) => gates.and(enable, gates.not(data)))),
    one: gates.or(...ones.map(({ data, enable }) => gates.and(enable, data))),
  };
}

function withConflict(gates: BusGates, value: Value, conflict: Value): Resolved {
  if (gates.isOne(conflict)) return { value: gates.unknown, conflict };
  if (gates.isZero(conflict)) return { value, conflict };
  // The gate is named outright: x may not be folded into the gates that two values would do with.
  const fanin = [gates.net(conflict), gates.net(value), gates.unknown];
  return { value: { kind: GateKind.Mux, fanin }, conflict };
}
