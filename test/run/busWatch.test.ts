import { describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { type EngineName, engineNames } from '../../compiler/engines.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { busEventText } from '../../compiler/run/outlets/busEvent.js';
import { signResponse } from '../../compiler/run/outlets/signResponse.js';
import { runDesign } from '../../compiler/run/runDesign.js';
import { layRow } from '../../runtime/layout.js';
import { readStimulus } from '../../runtime/node/index.js';
import { Signature } from '../../runtime/signature.js';

const text = `
module shared (input clk, ea, eb, da, db, output y, z, output reg q);
  wire w;
  tri1 pulled;
  bufif1 (w, da, ea);
  bufif1 (w, db, eb);
  bufif1 (pulled, da, ea);
  assign y = w, z = pulled;
  always @(posedge clk) q <= w;
endmodule
`;

// Off, one at a time, both and equal, both and opposite, and again.
const table = 'ea,eb,da,db\n0,0,0,0\n1,0,1,0\n0,1,1,0\n1,1,1,1\n1,1,1,0\n1,1,0,1\n0,0,1,1\n';

const run = (engine: EngineName, threeValued: boolean) => {
  const circuit = readNetlist([new Source('shared.v', text)], {}, new Diagnostics())!;
  const design = designOf(circuit, { threeValued });
  return runDesign(design, {
    stimulus: readStimulus('steps.csv', design.layout, [new TextEncoder().encode(table)]),
    engine,
    powerUp: threeValued ? 'unknown' : 'zero',
    seed: 0,
    outlets: [signResponse()],
  });
};

describe('buses', () => {
  it.each(engineNames)(
    'in conflict and floating are told by cycle on engine %s',
    async (engine) => {
      for (const threeValued of [false, true]) {
        const { buses } = await run(engine, threeValued);
        expect(buses!.map(busEventText)).toEqual([
          'shared.v:5:3: bus w: nothing drives it first at cycle 0, in 2 cycles in all',
          'shared.v:5:3: bus w: its drivers disagree first at cycle 4, in 2 cycles in all',
        ]);
      }
    },
  );

  it('leave the response as it is', async () => {
    // y, z, q from the least significant bit, and then which of them are x, cycle by cycle.
    const rows = Uint32Array.of(2, 5, 3, 4, 6, 0, 3, 0, 6, 1, 0, 5, 2, 5);
    const outputs = layRow(
      ['y', 'z', 'q'].map((name) => ({ name, width: 1, msb: 0, lsb: 0, isVector: false })),
    );
    const expected = new Signature({ outputs, threeValued: true });
    expected.add(rows, 7);
    for (const engine of engineNames) {
      expect((await run(engine, true)).signature, engine).toBe(expected.digits());
    }
  });
});
