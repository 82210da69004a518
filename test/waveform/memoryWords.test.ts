import { describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { signResponse } from '../../compiler/run/outlets/signResponse.js';
import { runDesign } from '../../compiler/run/runDesign.js';
import { withMemoryWords } from '../../compiler/waveform/memoryWords.js';
import { signalName, signalsOf } from '../../compiler/waveform/signalList.js';
import { WorkFolder } from '../support/command.js';

// Adds to one word in each cycle; words are numbered from 2 on, their bits from 1.
const text = `
  module box (input clk, input [7:0] in, output [16:1] q);
    store u (.clk(clk), .in(in), .q(q));
  endmodule
  module store (input clk, input [7:0] in, output [16:1] q);
    reg [16:1] ram [2:65];
    reg flag [0:1][0:255];
    assign q = ram[in];
    always @(posedge clk) begin ram[in] <= ram[in] + {8'd0, in}; flag[in[0]][in] <= !flag[in[0]][in]; end
  endmodule`;

const folder = new WorkFolder({ 'box.v': text, 'in.csv': 'in,@cycles\n3,3\n4,2\n3,2\n' });
const circuit = readNetlist([new Source('box.v', text)], {}, new Diagnostics())!;

const namesOf = (...patterns: string[]): string[] => {
  const shown = withMemoryWords(circuit, patterns, false);
  const list = signalsOf(shown.circuit, shown.patterns);
  return Array.from({ length: list.count }, (_, i) => signalName(shown.circuit.hierarchy, list, i));
};

describe('words of memories', () => {
  it('are signals of their scope where patterns name them', () => {
    expect(namesOf('u.ram[2]', 'box.u.ram[65]', '**.ram[2]')).toEqual(['u.ram[2]', 'u.ram[65]']);
    expect(namesOf('u.ram[3:5]', 'u.ram[4][8:1]')).toEqual([
      ...['u.ram[3]', 'u.ram[4]', 'u.ram[5]', 'u.ram[4][8:1]'],
    ]);
    expect(namesOf('u.flag[0:1][254:255]', 'in[3:0]')).toEqual([
      ...['u.flag[0][254]', 'u.flag[0][255]', 'u.flag[1][254]', 'u.flag[1][255]', 'in[3:0]'],
    ]);
  });

  it('are not among the signals else', () => {
    expect(namesOf('**').filter((name) => /ram|flag/.test(name))).toEqual([]);
    expect(withMemoryWords(circuit, ['**'], false).circuit).toBe(circuit);
  });

  it('are refused where they are not there', () => {
    expect(() => namesOf('u.ram[1]')).toThrow('u.ram[1]: u.ram has the words [2:65]');
    expect(() => namesOf('u.ram[60:66]')).toThrow('u.ram has the words [2:65]');
    expect(() => namesOf('u.ram[2][17]')).toThrow('u.ram[2] has no such bits');
    expect(() => namesOf('u.ram')).toThrow('no signal has such a name');
  });

  it('change nothing of what the circuit does', async () => {
    const design = designOf(circuit);
    const shown = withMemoryWords(circuit, ['u.ram[3]'], false);
    const rows = Uint32Array.from({ length: 50 }, (_, i) => i % 7);
    const responses = [];
    for (const each of [design, { ...design, circuit: shown.circuit }]) {
      const summary = await runDesign(each, {
        stimulus: [{ cycles: 50, rows, stride: 1 }],
        ...{ engine: 'wasm', powerUp: 'zero', seed: 0, outlets: [signResponse()] },
      });
      responses.push(summary.signature);
    }
    expect(responses[1]).toBe(responses[0]);
  });

  it.each(['wasm', 'bytecode', 'reference'])('have the values at sampling (%s)', async (engine) => {
    const nets = ['--nets', 'u.ram[3:4]', 'u.ram[3][4:1]', 'u.flag[1][3]', 'q'];
    const files = ['--table', 't.csv', '--waveform', 'w.vcd', '--power-up', 'zero'];
    const args = ['run', 'box.v', '--stimulus', 'in.csv', ...nets, ...files, '--engine', engine];
    expect((await folder.run(...args)).status).toBe(0);
    const [header, ...rows] = folder.read('t.csv').trimEnd().split('\n');
    expect(header).toBe('cycle,u.ram[3],u.ram[4],u.ram[3][4:1],u.flag[1][3],q');
    // Worked out by hand: 3 is added to word 3 in cycles 0, 1, 2, 5 and 6, 4 to word 4 in 3 and 4.
    const three = [0, 3, 6, 9, 9, 9, 12];
    const four = [0, 0, 0, 0, 4, 8, 8];
    const flag = [0, 1, 0, 1, 1, 1, 0];
    const q = [0, 3, 6, 0, 4, 9, 12];
    expect(rows.map((row) => row.split(',').map(Number))).toEqual(
      three.map((value, k) => [k, value, four[k], value, flag[k], q[k]]),
    );
    const dump = folder.read('w.vcd');
    expect(dump).toMatch(/\$scope module u \$end\n\$var \w+ 16 \S+ \\ram\[3\] \[16:1\] \$end/);
    expect(dump).toMatch(/\$var \w+ 1 \S+ \\flag\[1\]\[3\] \$end/);
  });
});
