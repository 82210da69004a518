import { describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { baseClocks } from '../../compiler/run/baseClocks.js';
import { vcdStimulus } from '../../runtime/node/vcd/vcdStimulus.js';
import { rowsOf } from '../support/stimulusRows.js';
import { bytesOf } from '../support/tables.js';

const text = `
module pair (input [0:2] clks, input d, output reg p, q, r);
  always @(posedge clks[0]) p <= d;
  always @(negedge clks[1]) q <= d;
  always @(posedge clks[2]) r <= d;
endmodule
`;
const circuit = readNetlist([new Source('p.v', text)], {}, new Diagnostics())!;
const timings = (...ports: string[]) => ports.map((port) => ({ port, period: 4, offset: 0 }));

describe('baseClocks', () => {
  const port = { name: 'clks', width: 3, msb: 0, lsb: 2, isVector: true };

  it('are all clocks where they tick together, with their active levels', () => {
    expect(baseClocks(designOf(circuit))).toEqual([
      { port, bit: 0, active: 1 },
      { port, bit: 1, active: 0 },
      { port, bit: 2, active: 1 },
    ]);
  });

  it('are the clock named first where each has its pace', () => {
    const paces = timings('clks[1]', 'clks[0]', 'clks[2]');
    expect(baseClocks(designOf(circuit, { timings: paces }), paces)).toEqual([
      { port, bit: 1, active: 0 },
    ]);
  });

  it('are found in a recording as bits of a vector or alone', async () => {
    const paces = timings('clks[1]', 'clks[0]', 'clks[2]');
    const design = designOf(circuit, { timings: paces });
    const replay = async (variable: string, high: string, low: string) => {
      const source = await vcdStimulus('p.vcd', design.layout, {
        clocks: baseClocks(design, paces),
        bytes: bytesOf(
          `${variable}\n$var wire 1 d d $end $enddefinitions $end\n` +
            `#0 ${high} 1d #1 ${low} #2 ${high} 0d #3 ${low}\n`,
        ),
      });
      return rowsOf(source.blocks(), design.layout);
    };
    // The outer bits never move.
    expect(await replay('$var wire 3 c clks [0:2] $end', 'b111 c', 'b101 c')).toEqual(['1', '0']);
    expect(await replay('$var wire 1 c clks [1] $end', '1c', '0c')).toEqual(['1', '0']);
  });
});
