import { describe, expect, it } from 'vitest';
import type { PowerUp } from '../../../compiler/circuit/powerUp.js';
import { type Design, designOf } from '../../../compiler/compile.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { compareDesign } from '../../../compiler/run/outlets/compareDesign.js';
import { runDesign } from '../../../compiler/run/runDesign.js';
import type { RunSummary } from '../../../compiler/run/runSummary.js';
import { heldStimulus, randomStimulus } from '../../../runtime/stream.js';

const options = { engine: 'bytecode', seed: 3 } as const;

function design(text: string, powerUp: PowerUp): Design {
  const circuit = readNetlist([new Source('d.v', text)], {}, new Diagnostics())!;
  return designOf(circuit, { threeValued: powerUp === 'unknown' });
}

interface Comparing {
  readonly powerUp?: PowerUp;
  readonly held?: boolean;
  readonly all?: boolean;
}

/** Runs two netlists beside each other; what was told, and the summary. */
async function compare(
  first: string,
  second: string,
  { powerUp = 'zero', held = false, all = false }: Comparing = {},
): Promise<RunSummary & { told: string[] }> {
  const [one, other] = [design(first, powerUp), design(second, powerUp)];
  const told: string[] = [];
  const onDeparture = (text: string) => told.push(text);
  const plan = compareDesign(one, other, 'other.v', { ...options, powerUp, all, onDeparture });
  const stimulus = held ? heldStimulus(one.layout, 9000) : randomStimulus(one.layout, 8, 9000);
  return { ...(await runDesign(one, { ...options, powerUp, stimulus, outlets: [plan] })), told };
}

const plain = `
module plain (input clk, d, input [2:0] e, output reg q, output reg [2:0] r);
  always @(posedge clk) begin q <= d; r <= r ^ e; end
endmodule
`;
const turned = `
module turned (input clk, input [2:0] e, input d, output reg [2:0] r, output reg q, extra);
  always @(posedge clk) begin r <= r ^ e; q <= d; extra <= ~d; end
endmodule
`;
// As `plain` but for one state in eight.
const wrong = plain.replace('r ^ e', '(r == 3 ? r : r ^ e)');

describe('compareDesign', () => {
  it.each(['zero', 'one', 'unknown'] as const)(
    'finds no departure of a design from one that does the same, from power-up %s',
    async (powerUp) => {
      for (const held of [false, true]) {
        const { cycles, mismatch, notes } = await compare(plain, turned, { powerUp, held });
        expect({ cycles, mismatch }).toEqual({ cycles: 9000, mismatch: undefined });
        expect(notes).toEqual([
          'the netlists differ in their ports: output extra is not in the first',
        ]);
      }
    },
  );

  it('lets registers of one name start alike from random power-up', async () => {
    expect((await compare(plain, turned, { powerUp: 'random' })).mismatch).toBeUndefined();
  });

  it('finds the first departure, and all', async () => {
    const { told, mismatch, cycles, stopped } = await compare(plain, wrong);
    expect(told).toEqual([
      `other.v: cycle ${mismatch!.cycle}: r is ${mismatch!.actual}, expected 0x3`,
    ]);
    expect(cycles).toBe(mismatch!.cycle + 1);
    expect(stopped).toEqual({
      cycle: mismatch!.cycle,
      reason: 'departs from the expectation',
    });
    const all = await compare(plain, wrong, { all: true });
    expect(all.mismatch).toEqual(mismatch);
    expect(all.cycles).toBe(9000);
    expect(all.told).toHaveLength(50);
    expect(all.mismatches).toBeGreaterThan(1000);
  });

  it('takes x in one design alone for a departure', async () => {
    const known = plain.replace('output reg [2:0] r', 'output reg [2:0] r = 0');
    const { told } = await compare(plain, known, { powerUp: 'unknown' });
    expect(told).toEqual(['other.v: cycle 0: r is 0bxxx, expected 0x0']);
  });

  it('refuses designs with other inputs', () => {
    const lacking =
      'module l (input clk, input d, output reg q); always @(posedge clk) q <= d; endmodule';
    expect(() =>
      compareDesign(design(plain, 'zero'), design(lacking, 'zero'), 'l.v', {
        ...options,
        powerUp: 'zero',
      }),
    ).toThrow(new RangeError('input e is not in the second; output r is not in the second'));
  });
});
