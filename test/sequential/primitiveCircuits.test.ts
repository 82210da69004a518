import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { designOf } from '../../compiler/compile.js';
import { RunFault } from '../../runtime/engine.js';
import { RandomBits } from '../../runtime/random.js';
import { circuitWithNotes } from '../support/primitiveTable.js';
import { play } from '../support/rows.js';
import { type CourseOptions, expectCourse, onEachEngine } from './courses.js';

/** Cells as primitives, and their pins: C a clock, L a level that acts at once, D data. */
const cells = {
  dff: {
    pins: 'CD',
    rows: 'r 0:?:0; r 1:?:1; (0x) 0:0:0; (0x) 1:1:1; (x1) 0:0:0; n ?:?:-; ? *:?:-;',
  },
  dffr: {
    pins: 'CDLL',
    rows: `? ? ? 0:?:0; ? ? 1 1:?:1; p 0 0 ?:?:0; p 1 ? 1:?:1; n ? ? ?:?:-; ? * ? ?:?:-;
      ? ? n ?:?:-; ? ? ? p:?:-;`,
  },
  latch: { pins: 'LLL', rows: '? ? 1:?:0; 1 0 ?:?:0; 1 1 0:?:1; 0 ? 0:?:-;' },
  both: { pins: 'CD', rows: '* 0:?:0; * 1:?:1; ? *:?:-;' },
  jk: {
    pins: 'CDDLL',
    rows: `? ? ? 0 1:?:1; ? ? ? * 1:1:1; ? ? ? 1 0:?:0; ? ? ? 1 *:0:0; r 0 0 0 0:0:1;
      r 0 0 1 1:?:-; r 0 1 1 1:?:0; r 1 0 1 1:?:1; r 1 1 1 1:0:1; r 1 1 1 1:1:0;
      f ? ? ? ?:?:-; b * ? ? ?:?:-; b ? * ? ?:?:-;`,
  },
  // Without rows for a select that is x.
  choice: { pins: 'LLL', rows: '0 0 ?:0; 0 1 ?:1; 1 ? 0:0; 1 ? 1:1;' },
} as const;
type Kind = keyof typeof cells;

const pinNames = 'abcde';
const namesOf = (kind: Kind): string => [...pinNames].slice(0, cells[kind].pins.length).join(', ');
const primitives = (Object.keys(cells) as Kind[])
  .map((kind) => {
    const reg = cells[kind].rows.includes(':?:') ? 'reg q;' : '';
    return `primitive ${kind} (q, ${namesOf(kind)}); output q; ${reg} input ${namesOf(kind)};
      table ${cells[kind].rows} endtable endprimitive`;
  })
  .join('\n');

/** The cells of which two-valued runs need no table, in the register-transfer style. */
const twins = `
  module dff (output reg q, input a, b); always @(posedge a) q <= b; endmodule
  module dffr (output reg q, input a, b, c, d);
    wire set = c & d;
    always @(posedge a or posedge set or negedge d) if (!d) q <= 0; else if (set) q <= 1; else q <= b;
  endmodule
  module latch (output reg q, input a, b, c); always @* if (c) q = 0; else if (a) q = b; endmodule
  module choice (output q, input a, b, c); assign q = a ? c : b; endmodule`;

interface CellRecipe {
  readonly kind: Kind | 'and' | 'xor';
  readonly pins: readonly number[];
  readonly clock: number;
}

const recipes = (kinds: readonly CellRecipe['kind'][]): fc.Arbitrary<CellRecipe[]> => {
  const pin = fc.nat(1000);
  const cell = fc.record({
    kind: fc.constantFrom(...kinds),
    pins: fc.array(pin, { minLength: 5, maxLength: 5 }),
    clock: fc.nat(9),
  });
  return fc.array(cell, { minLength: 3, maxLength: 9, size: 'max' });
};

/**
 * A module t of such cells with inputs u, v, w and clk; some clocks are gated, or come from cells
 * before. Data may come from any register, other pins from what stands before, so that none loops.
 */
function netlistOf(recipe: readonly CellRecipe[], models: string): string {
  const count = recipe.length;
  const isRegister = (i: number): boolean =>
    ['dff', 'dffr', 'both', 'jk'].includes(recipe[i]!.kind);
  const lines = recipe.map(({ kind, pins, clock }, own) => {
    const uses = kind === 'and' || kind === 'xor' ? 'LL' : cells[kind].pins;
    const terminals = [...uses].map((use, place) => {
      if (use === 'C' && clock < 8) return clock < 6 ? 'clk' : 'gated';
      const before = Array.from({ length: count }, (_, i) => i).filter(
        (i) => i < own || (use === 'D' && isRegister(i)),
      );
      const nets = ['u', 'v', 'w', ...before.map((i) => `n[${i}]`)];
      return nets[pins[place]! % nets.length]!;
    });
    return `${kind} cell${own} (n[${own}], ${terminals.join(', ')});`;
  });
  return `${models}
    module t (input clk, u, v, w, output [${count - 1}:0] n);
      reg enable; wire gated;
      always @* if (!clk) enable = u;
      and (gated, clk, enable);
      ${lines.join('\n')}
    endmodule`;
}

function rowsFrom(seed: number, unknownOneIn: number): string[] {
  const random = new RandomBits(seed);
  const digit = (): string =>
    unknownOneIn > 0 && random.next() % unknownOneIn === 0 ? 'x' : `${random.next() & 1}`;
  return Array.from({ length: 40 }, () => digit() + digit() + digit());
}

/** The response of every engine, or the cycle that had no result; fails where two differ. */
async function response(
  circuit: Circuit,
  rows: readonly string[],
  { powerUp, threeValued = false }: CourseOptions,
): Promise<string[] | number> {
  const design = designOf(circuit, { threeValued, clocks: ['clk'] });
  let first: string[] | number | undefined;
  await onEachEngine(design, powerUp ?? 'zero', (engine, name) => {
    let own: string[] | number;
    try {
      own = play(engine, rows);
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      own = error.completed;
    }
    first ??= own;
    expect(own, name).toEqual(first);
  });
  return first!;
}

const everyKind = [...(Object.keys(cells) as Kind[]), 'and', 'xor'] as const;
const knownKinds = ['dff', 'dffr', 'latch', 'choice', 'and', 'xor'] as const;

describe('circuits of primitives', () => {
  it.each([
    ['two values', { threeValued: false }, 25],
    ['three values', { threeValued: true, powerUp: 'unknown' }, 10],
  ] as const)('run alike on all engines with %s', (_, options, numRuns) =>
    fc.assert(
      fc.asyncProperty(recipes(everyKind), fc.nat(1e6), async (recipe, seed) => {
        const circuit = circuitWithNotes(netlistOf(recipe, primitives));
        await response(circuit, rowsFrom(seed, options.threeValued ? 6 : 0), options);
      }),
      { seed: 20260304, numRuns },
    ),
  );

  // Also where several inputs of a cell change at the same moment.
  it('do what their twins in the register-transfer style do, also with three values', () =>
    fc.assert(
      fc.asyncProperty(recipes(knownKinds), fc.nat(1e6), async (recipe, seed) => {
        const circuit = circuitWithNotes(netlistOf(recipe, primitives));
        const twin = circuitWithNotes(netlistOf(recipe, twins));
        const rows = rowsFrom(seed, 0);
        const expected = await response(twin, rows, {});
        expect(await response(circuit, rows, {})).toEqual(expected);
        expect(await response(circuit, rows, { threeValued: true })).toEqual(expected);
      }),
      { seed: 20260305, numRuns: 16 },
    ));
});

// The order in which one cell takes changes of the same moment, as the README has it.
describe('inputs of a cell that change at the same moment', () => {
  const alone = (kind: Kind): Circuit =>
    circuitWithNotes(`${primitives}
      module t (input ${namesOf(kind)}, output q); ${kind} one (q, ${namesOf(kind)}); endmodule`);
  /** Expects a course with two values, and the same with three. */
  const expectBoth = async (kind: Kind, course: string): Promise<void> => {
    for (const threeValued of [false, true]) {
      const options = { threeValued, powerUp: 'zero', clocks: [] } as const;
      await expectCourse(alone(kind), course, options);
    }
  };
  const oldData = `// clock and data : state
    0 0 : 0
    1 1 : 0 // the edge sees the data of before
    0 1 : Q`;

  it('are taken with the clock first, so that it sees the data of before', async () => {
    await expectBoth('dff', `${oldData.replace('Q', '0')}\n1 0 : 1`);
    await expectBoth('both', `${oldData.replace('Q', '1')}\n1 0 : 1\n0 1 : 0`);
  });

  it('are taken with a set or reset before the clock', () =>
    expectBoth(
      'dffr',
      `// clock, data, set, reset (active low) : state
      0 1 0 0 : 0
      1 1 0 1 : 1 // released, and then captured
      0 1 0 1 : 1
      1 1 0 0 : 0 // a reset that comes with the edge wins
      0 0 1 0 : 0
      1 0 1 1 : 1 // the set wins
      0 0 0 1 : 1
      1 0 0 1 : 0`,
    ));
});

describe('cells that run from their table', () => {
  const shift = (kind: string) =>
    circuitWithNotes(`${primitives}
      module t (input clk, d, output [2:0] q);
        ${kind} one (q[0], clk, d), two (q[1], clk, q[0]), three (q[2], clk, q[1]);
      endmodule`);

  it('pass a value on by one stage at each edge', () =>
    expectCourse(
      shift('both'),
      `1 : 000
      0 : 011 // an active edge and a return have come
      0 : 100
      1 : 000
      1 : 011
      1 : 111`,
    ));

  it('divide a clock, and see what was captured together with its edge', () =>
    expectCourse(
      circuitWithNotes(`primitive swing (q, c, d); output q; reg q; input c, d;
          table r ?:0:1; r ?:1:0; f ?:?:-; ? r:?:-; ? f:0:-; ? f:1:0; endtable
        endprimitive
        ${primitives}
        module t (input clk, output [2:0] q);
          swing one (q[0], clk, 1'b1);
          both two (q[1], q[0], q[2]);
          reg r; initial r = 0;
          always @(posedge clk) r <= ~r;
          assign q[2] = r;
        endmodule`),
      `: 000
      : 111
      : 000
      : 111`,
    ));
});
