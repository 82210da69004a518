import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { lock, lockStates } from '../../../benchmarks/circuits/machine.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { evaluate } from './evaluate.js';

const times = { gate: 3, water: 9, dwell: 4 };

interface Inputs {
  readonly call_below: number;
  readonly call_above: number;
  readonly doorway_clear: number;
  readonly level_high: number;
  readonly level_low: number;
  readonly acknowledge: number;
}

/** The lock as a person would tell it: a place in the story and the cycles since it began. */
class LockModel {
  place: (typeof lockStates)[number] = 'open_below';
  age = times.dwell;

  step(inputs: Inputs): void {
    const next = this.#next(inputs);
    this.age = next === undefined ? this.age + 1 : 0;
    this.place = next ?? this.place;
  }

  #next(inputs: Inputs): LockModel['place'] | undefined {
    const isOver = (time: number) => this.age >= time;
    switch (this.place) {
      case 'open_below':
      case 'open_above': {
        const called = inputs.call_below || inputs.call_above;
        if (!called || !inputs.doorway_clear || !isOver(times.dwell)) return undefined;
        return this.place === 'open_below' ? 'closing_below' : 'closing_above';
      }
      case 'closing_below':
        return isOver(times.gate) ? 'filling' : undefined;
      case 'closing_above':
        return isOver(times.gate) ? 'draining' : undefined;
      case 'opening_above':
        return isOver(times.gate) ? 'open_above' : undefined;
      case 'opening_below':
        return isOver(times.gate) ? 'open_below' : undefined;
      case 'filling':
        if (inputs.level_high) return 'opening_above';
        return isOver(times.water) ? 'alarm' : undefined;
      case 'draining':
        if (inputs.level_low) return 'opening_below';
        return isOver(times.water) ? 'alarm' : undefined;
      default:
        return inputs.acknowledge ? 'draining' : undefined;
    }
  }
}

const often = fc.nat(2).map((n) => Number(n > 0));
const seldom = fc.nat(5).map((n) => Number(n === 0));
const inputs: fc.Arbitrary<Inputs> = fc.record({
  call_below: seldom,
  call_above: seldom,
  doorway_clear: often,
  level_high: seldom,
  level_low: seldom,
  acknowledge: seldom,
});

const outputOf: Record<string, string> = {
  closing_below: 'close_below',
  closing_above: 'close_above',
  opening_below: 'open_below',
  opening_above: 'open_above',
  filling: 'fill',
  draining: 'drain',
  alarm: 'horn',
};

describe('the canal lock', () => {
  test('follows the story of its specification in every cycle', () => {
    const circuit = evaluate(verilog(lock(times)));
    const visited = new Set<string>();
    fc.assert(
      fc.property(fc.array(inputs, { minLength: 150, maxLength: 300 }), (rows) => {
        const model = new LockModel();
        circuit.set('reset', 1);
        circuit.clock();
        circuit.set('reset', 0);
        for (const row of rows) {
          for (const [name, value] of Object.entries(row)) circuit.set(name, value);
          const index = lockStates.indexOf(model.place);
          expect(circuit.get('state')).toBe(1n << BigInt(index));
          for (const [place, output] of Object.entries(outputOf)) {
            expect(circuit.get(output)).toBe(BigInt(place === model.place));
          }
          const clear = row.doorway_clear === 1;
          expect(circuit.get('signal_below')).toBe(BigInt(clear && model.place === 'open_below'));
          expect(circuit.get('signal_above')).toBe(BigInt(clear && model.place === 'open_above'));
          visited.add(model.place);
          circuit.clock();
          model.step(row);
        }
      }),
      { seed: 6, numRuns: 60 },
    );
    expect(visited.size).toBe(lockStates.length);
  });
});
