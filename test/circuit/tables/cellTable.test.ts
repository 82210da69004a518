import { describe, expect, it } from 'vitest';
import { sequentialTable } from '../../../compiler/circuit/tables/cellTable.js';
import { Diagram, Leaf } from '../../../compiler/circuit/tables/diagram.js';
import { eventsOfFunction } from '../../../compiler/circuit/tables/tableEvents.js';

describe('a diagram', () => {
  const [a, b, state] = [0, 1, 2];
  const diagram = new Diagram([a, b, state], 3);

  it('has one number for a function, however it was made', () => {
    const swap = diagram.node(a, Leaf.One, Leaf.Zero, Leaf.Unknown);
    const not = (ref: number) => diagram.compose([ref], ([v]) => (v === 2 ? 2 : 1 - v!));
    expect(not(diagram.valueOf(a))).toBe(swap);
    expect(not(not(diagram.valueOf(b)))).toBe(diagram.valueOf(b));
    expect(diagram.node(a, swap, swap, swap)).toBe(swap);
  });

  it('takes a state that stays for no change', () => {
    expect(diagram.valueOf(state)).toBe(Leaf.Hold);
    expect(diagram.node(state, Leaf.Hold, Leaf.One, Leaf.Unknown)).toBe(Leaf.Hold);
    const cleared = diagram.node(state, Leaf.Hold, Leaf.Zero, Leaf.Zero);
    expect(cleared).toBe(Leaf.Zero);
  });

  it('leads by plain values to what a restriction leaves', () => {
    const chosen = diagram.node(a, Leaf.Hold, diagram.valueOf(b), Leaf.Unknown);
    for (const at of [0, 1, 2]) {
      for (const other of [0, 1, 2]) {
        for (const held of [0, 1, 2]) {
          const left = diagram.restrict(diagram.restrict(chosen, a, at), b, other);
          const value = diagram.walk(chosen, (variable) => [at, other, held][variable]!);
          expect(value).toBe(left === Leaf.Hold ? held : left);
        }
      }
    }
    expect([...diagram.support(chosen)].sort()).toEqual([a, b]);
  });
});

describe('the table of a cell', () => {
  // Clock, data, clear: the clear decides alone, the clock takes the data.
  const clearable = (input: number, levels: number): number => {
    if ((levels & 4) !== 0) return Leaf.Zero;
    return input === 0 && (levels & 1) !== 0 ? (levels >> 1) & 1 : Leaf.Hold;
  };
  const roles = { levels: [2], forcing: new Map([[2, 1]]), clocks: [0], edges: [] };

  it('needs no form of two values where there is a register beside it', () => {
    const source = eventsOfFunction(clearable, 3);
    const both = [true, false].map((isRecognized) =>
      sequentialTable('t', 3, source, { ...roles, isRecognized }),
    );
    expect(both.map(({ two }) => two === undefined)).toEqual([true, false]);
  });

  it('lets what decides alone act at once and the clock at its edges, the others never', () => {
    const source = eventsOfFunction(clearable, 3);
    const table = sequentialTable('t', 3, source, { ...roles, isRecognized: false });
    expect(table.two!.settlers).toEqual([2]);
    expect(table.two!.events.map((event) => event === Leaf.Hold)).toEqual([false, true, false]);
    expect([table.first, table.later]).toEqual([
      [2, 0, 1],
      [2, 1, 0],
    ]);
  });
});
