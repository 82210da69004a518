import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { Priority } from '../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../compiler/circuit/clockPorts.js';
import { GateKind } from '../../../compiler/circuit/gates.js';
import { NO_NET } from '../../../compiler/circuit/ids.js';
import { inputRowNets, outputRowNets } from '../../../compiler/circuit/modelLayout.js';
import { powerUpState } from '../../../compiler/circuit/powerUp.js';
import { type RandomCircuitOptions, randomCircuit } from '../../support/randomCircuit.js';
import { firstDifference, randomRows, responseOf } from '../../support/responses.js';
import { referenceFor } from '../../support/rows.js';

const CYCLES = 40;

/** Every cycle from scratch, by recursion: right by inspection for one clock edge, and slow. */
function plainResponse(
  circuit: Circuit,
  rows: Uint32Array,
  words: number,
  cycles: number,
): string[] {
  const { registers } = circuit;
  const inputs = inputRowNets(circuit, findClockPorts(circuit));
  let state: number[] = Array.from(registers.initial, (value) => (value === 1 ? 1 : 0));
  const responses: string[] = [];
  for (let row = 0; row < cycles; row++) {
    const bits = Array.from(inputs, (net, bit): [number, number] => [
      net,
      (rows[row * words + (bit >>> 5)]! >>> (bit & 31)) & 1,
    ]);
    const now = new Settled(circuit, bits, state);
    responses.push(Array.from(outputRowNets(circuit), (net) => now.value(net)).join(''));
    const captured = Array.from(registers.data, (net, i) => now.withSetReset(i, now.value(net)));
    const after = new Settled(circuit, bits, captured);
    state = Array.from(registers.output, (net) => after.value(net));
  }
  return responses;
}

class Settled {
  readonly #circuit: Circuit;
  readonly #held: readonly number[];
  readonly #known: Map<number, number>;

  constructor(circuit: Circuit, inputs: readonly [number, number][], held: readonly number[]) {
    this.#circuit = circuit;
    this.#held = held;
    this.#known = new Map(inputs);
  }

  value(net: number): number {
    const value = this.#known.get(net) ?? this.#compute(net);
    this.#known.set(net, value);
    return value;
  }

  withSetReset(register: number, held: number): number {
    const { set, reset, priority } = this.#circuit.registers;
    const isActive = (net: number) => net !== NO_NET && this.value(net) === 1;
    const isSet = isActive(set[register]!);
    const isReset = isActive(reset[register]!);
    if (isSet && priority[register] === Priority.SetWins) return 1;
    if (isReset) return 0;
    return isSet ? 1 : held;
  }

  #compute(net: number): number {
    const { kind, faninStart, fanin, registers } = this.#circuit;
    if (kind[net] === GateKind.Register) {
      const register = registers.output.indexOf(net);
      return this.withSetReset(register, this.#held[register]!);
    }
    const nets = Array.from(fanin.subarray(faninStart[net]!, faninStart[net + 1]!));
    const values = nets.map((source) => this.value(source));
    const ones = values.filter((value) => value === 1).length;
    switch (kind[net]) {
      case GateKind.One:
        return 1;
      case GateKind.Buf:
        return ones;
      case GateKind.Not:
        return 1 - ones;
      case GateKind.And:
        return ones === values.length ? 1 : 0;
      case GateKind.Nand:
        return ones === values.length ? 0 : 1;
      case GateKind.Or:
        return ones > 0 ? 1 : 0;
      case GateKind.Nor:
        return ones > 0 ? 0 : 1;
      case GateKind.Xor:
        return ones % 2;
      case GateKind.Xnor:
        return 1 - (ones % 2);
      case GateKind.Mux:
        return values[0] === 1 ? values[2]! : values[1]!;
      default:
        return 0;
    }
  }
}

function bitStrings(rows: Uint32Array, words: number, bits: number): string[] {
  const strings: string[] = [];
  for (let at = 0; at < rows.length; at += words) {
    const row = Array.from({ length: bits }, (_, b) => (rows[at + (b >>> 5)]! >>> (b & 31)) & 1);
    strings.push(row.join(''));
  }
  return strings;
}

const runs = (numRuns: number) => ({ seed: 20, numRuns });

describe('the reference engine on random circuits', () => {
  it('agrees with a plain recursive evaluation', () => {
    fc.assert(
      fc.property(
        randomCircuit({ asynchronous: true, unknowns: true }),
        fc.nat(),
        (circuit, seed) => {
          const engine = referenceFor(circuit);
          const { inputs, outputs } = engine.layout;
          const stimulus = randomRows(engine.layout, seed, CYCLES);
          const response = responseOf(engine, CYCLES, stimulus);
          expect(bitStrings(response, outputs.words, outputs.bits)).toEqual(
            plainResponse(circuit, stimulus, inputs.words, CYCLES),
          );
        },
      ),
      runs(200),
    );
  });

  const everything: RandomCircuitOptions = {
    clocking: 'divided',
    asynchronous: true,
    latches: true,
  };

  it('gives the same response with three values as with two while nothing is x', () => {
    fc.assert(
      fc.property(randomCircuit(everything), fc.nat(), (circuit, seed) => {
        const two = referenceFor(circuit);
        const three = referenceFor(circuit, true);
        three.reset(powerUpState(circuit, 'zero'));
        const stimulus = randomRows(two.layout, seed, CYCLES);
        const { words } = two.layout.inputs;
        const widened = new Uint32Array(stimulus.length * 2);
        for (let i = 0; i < stimulus.length; i++) {
          widened[Math.floor(i / words) * words * 2 + (i % words)] = stimulus[i]!;
        }
        const { outputs } = two.layout;
        const expected = bitStrings(responseOf(two, CYCLES, stimulus), outputs.words, outputs.bits);
        const actual = bitStrings(responseOf(three, CYCLES, widened), outputs.words, outputs.bits);
        expect(actual.filter((_, i) => i % 2 === 0)).toEqual(expected);
        expect(actual.filter((_, i) => i % 2 === 1).join('')).not.toContain('1');
        expect(three.state()).toEqual(two.state());
      }),
      runs(150),
    );
  });

  it('knows a bit in a three-valued run only if it has that value whatever the x are', () => {
    const options: RandomCircuitOptions = { clocking: 'gated', asynchronous: true, latches: true };
    fc.assert(
      fc.property(randomCircuit(options), fc.nat(), (circuit, seed) => {
        const three = referenceFor(circuit, true);
        const two = referenceFor(circuit);
        two.reset(powerUpState(circuit, 'random', seed));
        const { inputs, outputs } = three.layout;
        const rows = randomRows(three.layout, seed, CYCLES);
        const guess = randomRows(two.layout, seed + 1, CYCLES);
        for (let i = 0; i < guess.length; i++) {
          const at = Math.floor(i / inputs.words) * inputs.words * 2 + (i % inputs.words);
          const isX = rows[at + inputs.words]!;
          guess[i] = (rows[at]! & ~isX) | (guess[i]! & isX);
        }
        const known = responseOf(three, CYCLES, rows);
        const possible = responseOf(two, CYCLES, guess);
        for (let i = 0; i < possible.length; i++) {
          const at = Math.floor(i / outputs.words) * outputs.words * 2 + (i % outputs.words);
          possible[i] = (possible[i]! & ~known[at + outputs.words]!) >>> 0;
          expect(possible[i], `word ${i}`).toBe(known[at]);
        }
      }),
      runs(150),
    );
  });

  it('goes on where it stopped: two runs give what one long run gives', () => {
    fc.assert(
      fc.property(randomCircuit(everything), fc.nat(), (circuit, seed) => {
        const whole = referenceFor(circuit);
        const split = referenceFor(circuit);
        const stimulus = randomRows(whole.layout, seed, CYCLES);
        const { words } = whole.layout.inputs;
        const first = responseOf(split, 15, stimulus.subarray(0, 15 * words));
        const second = responseOf(split, CYCLES - 15, stimulus.subarray(15 * words));
        const joined = Uint32Array.from([...first, ...second]);
        const expected = responseOf(whole, CYCLES, stimulus);
        expect(firstDifference(whole.layout, joined, expected)).toBeUndefined();
      }),
      runs(60),
    );
  });
});
