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
    const rails = railsOf(gates, level);
    const both = rails ? gates.and(rails.zero, rails.one) : gates.zero;
    conflict = gates.or(gates.and(gates.not(level.driven), conflict), both);
    const lower = gates.isOne(level.driven) ? undefined : value;
    value = levelValue(gates, type, level, rails, lower);
  }
  const canConflict = type !== NetType.And && type !== NetType.Or;
  return { value: value ?? gates.unknown, conflict: canConflict ? conflict : gates.zero };
}

function drivenBy(gates: BusGates, term: Contribution, strength: Strength): Value {
  if (term.zero === term.one) return term.enable;
  return term.one === strength
    ? gates.and(term.enable, term.data)
    : gates.and(term.enable, gates.not(term.data));
}

/** Whether something drives 0, and 1; undefined where only one thing drives, and both. */
interface Rails {
  readonly zero: Value;
  readonly one: Value;
}

function railsOf(gates: BusGates, { strength, terms }: Level): Rails | undefined {
  if (terms.length === 1 && terms[0]!.zero === terms[0]!.one) return undefined;
  const zeros = terms.filter(({ zero }) => zero === strength);
  const ones = terms.filter(({ one }) => one === strength);
  return {
    zero: gates.or(...zeros.map(({ data, enable }) => gates.and(enable, gates.not(data)))),
    one: gates.or(...ones.map(({ data, enable }) => gates.and(enable, data))),
  };
}

// Each form is exact where enables and data are x: `lower` shows through as far as nothing may
// hide it, and a value that all who may drive agree on is kept.
function levelValue(
  gates: BusGates,
  type: NetType,
  { terms }: Level,
  rails: Rails | undefined,
  lower: Value | undefined,
): Value {
  const [{ data, enable }] = terms as [Contribution, ...Contribution[]];
  if (rails === undefined) return lower === undefined ? data : gates.mux(enable, lower, data);
  const { zero, one } = rails;
  if (type === NetType.And) {
    const isSteady = terms.every((term) => gates.isOne(term.enable) && term.zero === term.one);
    if (isSteady) return gates.and(...terms.map((term) => term.data));
    const raised = lower === undefined ? gates.one : gates.or(one, lower);
    return gates.and(gates.not(zero), raised);
  }
  const shown = lower === undefined ? gates.zero : gates.and(lower, gates.not(zero));
  const value = gates.or(one, shown);
  if (type === NetType.Or) return value;
  const both = gates.and(zero, one);
  if (gates.isOne(both)) return gates.unknown;
  return gates.isZero(both) ? value : { kind: GateKind.Mux, fanin: muxFanin(gates, both, value) };
}

// The gate is named outright: x may not be folded into the gates that two values would do with.
const muxFanin = (gates: BusGates, conflict: Value, value: Value): NetId[] => [
  gates.net(conflict),
  gates.net(value),
  gates.unknown,
];
