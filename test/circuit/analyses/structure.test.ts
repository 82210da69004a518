import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { deepestPath } from '../../../compiler/circuit/analyses/deepestPath.js';
import { gatesByLevel, registersByDepth } from '../../../compiler/circuit/analyses/depthCounts.js';
import { loopPath } from '../../../compiler/circuit/analyses/loopPath.js';
import { mostRead, readCounts, statePins } from '../../../compiler/circuit/analyses/readCounts.js';
import { unusedParts } from '../../../compiler/circuit/analyses/unused.js';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { isGate } from '../../../compiler/circuit/gates.js';
import { NO_NET } from '../../../compiler/circuit/ids.js';
import { levelsOf } from '../../../compiler/circuit/levels.js';
import { loopsOf, SettlingSources } from '../../../compiler/circuit/loops.js';
import { randomCircuit } from '../../support/randomCircuit.js';

const SEED = 20261204;
const runs = { seed: SEED, numRuns: 60 };

const plain = randomCircuit({ asynchronous: true, latches: true });
const looped = randomCircuit({ asynchronous: true, loops: true });

const faninOf = ({ fanin, faninStart }: Circuit, net: number): number[] =>
  Array.from(fanin.subarray(faninStart[net]!, faninStart[net + 1]!));

/** All nets that each net reads: through gates, or through everything. */
function sourcesOf(circuit: Circuit, net: number, throughState: boolean): number[] {
  if (isGate(circuit.kind[net]!)) return faninOf(circuit, net);
  if (!throughState) return [];
  const { registers, latches } = circuit;
  return [
    ...[registers.data, registers.clock, registers.set, registers.reset].flatMap((pins) =>
      Array.from(pins).filter((_, r) => registers.output[r] === net),
    ),
    ...[latches.data, latches.enable, latches.set, latches.reset].flatMap((pins) =>
      Array.from(pins).filter((_, l) => latches.output[l] === net),
    ),
  ].filter((source) => source !== NO_NET);
}

/** Whether each net is reached from some nets, by repetition until nothing changes. */
function reached(circuit: Circuit, starts: readonly number[], throughState: boolean): Set<number> {
  const found = new Set(starts);
  for (let before = -1; before !== found.size; ) {
    before = found.size;
    for (const net of [...found]) {
      for (const source of sourcesOf(circuit, net, throughState)) found.add(source);
    }
  }
  return found;
}

describe('unused parts', () => {
  it('are what no walk back from the outputs, or from state, comes by', () =>
    fc.assert(
      fc.property(fc.oneof(plain, looped), (circuit) => {
        const { registers, latches } = circuit;
        const outputs = circuit.outputs.flatMap(({ nets }) => Array.from(nets));
        const pins = statePins(circuit).flatMap((column) =>
          Array.from(column).filter((net) => net !== NO_NET),
        );
        const leading = reached(circuit, [...outputs, ...pins], false);
        const observed = reached(circuit, outputs, true);
        const { gates, state } = unusedParts(circuit);
        const nets = Array.from({ length: circuit.netCount }, (_, net) => net);
        expect(Array.from(gates)).toEqual(
          nets.filter((net) => isGate(circuit.kind[net]!) && !leading.has(net)),
        );
        expect(Array.from(state)).toEqual(
          [...registers.output, ...latches.output].filter((net) => !observed.has(net)),
        );
      }),
      runs,
    ));
});

describe('read counts', () => {
  it('count every gate input, pin and output bit once', () =>
    fc.assert(
      fc.property(plain, (circuit) => {
        const counts = readCounts(circuit);
        const pins = statePins(circuit)
          .flatMap((column) => Array.from(column))
          .filter((net) => net !== NO_NET).length;
        const bits = circuit.outputs.reduce((sum, { nets }) => sum + nets.length, 0);
        expect(counts.reduce((sum, each) => sum + each, 0)).toBe(
          circuit.fanin.length + pins + bits,
        );
      }),
      runs,
    ));

  it('are sorted by mostRead, ties by net', () =>
    fc.assert(
      fc.property(fc.array(fc.nat(6), { maxLength: 40 }), fc.nat(8), (list, limit) => {
        const counts = Uint32Array.from(list);
        const isOdd = (net: number) => net % 2 === 1;
        const all = list.map((_, net) => net).filter((net) => isOdd(net) && counts[net]! > 0);
        const sorted = all.sort((p, q) => counts[q]! - counts[p]! || p - q);
        expect(mostRead(counts, limit + 1, isOdd)).toEqual(sorted.slice(0, limit + 1));
      }),
      runs,
    ));
});

describe('the deepest path', () => {
  it('leads from a source through as many gates as there are levels', () =>
    fc.assert(
      fc.property(fc.oneof(plain, looped), (circuit) => {
        const level = levelsOf(circuit);
        const path = Array.from(deepestPath(circuit, level));
        const depth = Math.max(0, ...level);
        expect(path.length).toBe(depth === 0 ? 0 : depth + 1);
        path.forEach((net, i) => {
          expect(isGate(circuit.kind[net]!)).toBe(i > 0);
          if (i > 0) expect(faninOf(circuit, net)).toContain(path[i - 1]);
        });
      }),
      runs,
    ));
});

describe('depth counts', () => {
  it('agree with the longest paths found by trying all', () =>
    fc.assert(
      fc.property(randomCircuit({ maxGates: 14, maxRegisters: 4 }), (circuit) => {
        const level = levelsOf(circuit);
        const { registers, kind } = circuit;
        const starts = new Set(registers.output);
        const longest = (net: number): number => {
          if (starts.has(net)) return 0;
          const before = isGate(kind[net]!) ? faninOf(circuit, net).map(longest) : [];
          return Math.max(-Infinity, ...before) + 1;
        };
        const depths = Array.from(registers.data, longest).filter((depth) => depth >= 0);
        const expected = Array.from(
          { length: Math.max(-1, ...depths) + 1 },
          (_, depth) => depths.filter((each) => each === depth).length,
        );
        expect(Array.from(registersByDepth(circuit, level))).toEqual(expected);
        const gates = Array.from(kind).filter(isGate).length;
        expect(gatesByLevel(circuit, level).reduce((sum, each) => sum + each, 0)).toBe(gates);
      }),
      runs,
    ));
});

describe('a loop path', () => {
  it('goes round once, each net read by the next', () =>
    fc.assert(
      fc.property(looped, (circuit) => {
        const loops = loopsOf(circuit);
        const sources = new SettlingSources(circuit);
        loops.nets.forEach((nets, loop) => {
          const path = loopPath(loops, sources, loop);
          expect(path[0]).toBe(Math.min(...nets));
          expect(new Set(path).size).toBe(path.length);
          path.forEach((net, i) => {
            expect(nets).toContain(net);
            const next = path[(i + 1) % path.length]!;
            const read: number[] = [];
            for (let k = 0, s = sources.at(next, 0); s !== -1; s = sources.at(next, ++k)) {
              read.push(s);
            }
            expect(read).toContain(net);
          });
        });
      }),
      runs,
    ));
});
