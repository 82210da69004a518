import type { Circuit } from '../circuit/circuit.js';
import type { ClockPort } from '../circuit/clockPorts.js';
import { GateKind, gateInfo } from '../circuit/gates.js';
import { X } from '../circuit/values.js';
import { AND, choose, NOT, OR, XOR } from '../interpret/reference/values.js';

const operations = { and: AND, or: OR, xor: XOR };

/** What a net always is while outputs are sampled, and the clocks that its gates read. */
export interface SampledLevel {
  /** 0, 1, or x (2) where it depends on more than clocks. */
  readonly level: number;
  readonly clocks: readonly ClockPort[];
}

/** Follows the gates of a net back, with every clock at the level at which outputs are sampled. */
export function sampledLevel(
  circuit: Circuit,
  clocks: readonly ClockPort[],
  net: number,
): SampledLevel {
  const { kind, fanin, faninStart } = circuit;
  const levels = new Map<number, number>();
  const read = new Set<ClockPort>();
  const pending = [net];
  for (let at = pending.at(-1); at !== undefined; at = pending.at(-1)) {
    const { role } = gateInfo(kind[at]!);
    const sources = role === 'gate' ? fanin.subarray(faninStart[at], faninStart[at + 1]) : [];
    const open = levels.has(at) ? [] : [...sources].filter((source) => !levels.has(source));
    // Until its sources are known, and for good in a loop, nothing is known of a net.
    if (open.length > 0) levels.set(at, X);
    pending.push(...open);
    if (open.length > 0) continue;
    pending.pop();
    const clock = clocks.find((port) => port.net === at);
    if (clock !== undefined) read.add(clock);
    const values = Array.from(sources, (source) => levels.get(source)!);
    levels.set(at, clock?.inactive ?? levelOf(kind[at]!, values));
  }
  return { level: levels.get(net)!, clocks: [...read] };
}

function levelOf(kind: number, values: readonly number[]): number {
  if (kind === GateKind.Zero || kind === GateKind.One) return kind;
  if (kind === GateKind.Mux) return choose(values[0]!, values[1]!, values[2]!);
  const { fold } = gateInfo(kind);
  if (fold === undefined || values.length === 0) return X;
  const value = values.reduce((a, b) => operations[fold.operation][a * 3 + b]!);
  return fold.inverted ? NOT[value]! : value;
}
