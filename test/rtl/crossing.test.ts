import { describe, expect, it } from 'vitest';
import { expectModel, type Model, onEveryEngine, randomInputs, rtlDesign } from './circuits.js';

/** Phases of a pedestrian crossing in their order: ticks, lamps of cars, light of walkers. */
const phases = [
  { ticks: 6, car: 0b001, walk: 'off' },
  { ticks: 2, car: 0b010, walk: 'off' },
  { ticks: 1, car: 0b100, walk: 'off' },
  { ticks: 4, car: 0b100, walk: 'on' },
  { ticks: 5, car: 0b100, walk: 'blinks' },
  { ticks: 1, car: 0b100, walk: 'off' },
  { ticks: 2, car: 0b110, walk: 'off' },
] as const;
const WALK = 3;

const crossing = (): Model => {
  let phase = 0;
  let passed = 0;
  let waiting = false;
  return ({ rst_n, tick, button }) => {
    if (!rst_n) [phase, passed, waiting] = [0, 0, false];
    const { ticks, car, walk } = phases[phase]!;
    const isOn = walk === 'on' || (walk === 'blinks' && (ticks - 1 - passed) % 2 === 1);
    const outputs = { car, walk: isOn ? 1 : 0, wait_lamp: waiting ? 1 : 0 };
    if (!rst_n) return outputs;
    const isOver = passed === ticks - 1;
    const mayLeave = phase !== 0 || waiting;
    if (button) waiting = true;
    if (tick && isOver && mayLeave) {
      phase = (phase + 1) % phases.length;
      passed = 0;
    } else if (tick && !isOver) passed++;
    if (phase === WALK) waiting = false;
    return outputs;
  };
};

const codings = ['crossing_binary', 'crossing_onehot', 'crossing_table'];

describe('the pedestrian crossing', () => {
  it.each(codings)('does as its table of phases says: %s', async (coding) => {
    const design = rtlDesign([`${coding}.v`]);
    const rows = randomInputs(design, 1, 2000, (_, chance, cycle) => ({
      rst_n: cycle === 0 || chance(300) ? 0 : 1,
      tick: chance(2) ? 1 : 0,
      button: chance(9) ? 1 : 0,
    }));
    await expectModel(design, crossing, rows);
  });

  it('lets nobody walk while cars may drive, and goes on through all phases for one button', async () => {
    const design = rtlDesign(['crossing_onehot.v']);
    const rows = Array.from({ length: 60 }, (_, cycle) => ({
      rst_n: cycle > 0 ? 1 : 0,
      tick: 1,
      button: cycle === 10 ? 1 : 0,
    }));
    await onEveryEngine(design, rows, (read) => {
      const lamps = rows.map((_, cycle) => `${read('car', cycle)}${read('walk', cycle)}`);
      const changes = lamps.filter((lamp, cycle) => lamp !== lamps[cycle - 1]);
      // Green, amber, red; walk, off and on again twice while it blinks, off; red and amber; green.
      expect(changes.join(' ')).toBe('10 20 40 41 40 41 40 41 40 60 10');
    });
  });
});
