import { describe, expect, it } from 'vitest';
import { circuitOf, reading, signalValue } from './reading.js';

describe('an array of nets', () => {
  it('is driven word by word by assigns, instances and gates, and read at any index', () => {
    const circuit = circuitOf(`
      module inc (input [3:0] a, output [3:0] y); assign y = a + 1; endmodule
      module t (input [3:0] a, input [2:0] i, output [3:0] y, output z);
        localparam N = 1;
        wire [3:0] w [0:4];
        wire s [2:1];
        assign w[0] = a;
        inc u1 (w[0], w[N]);
        inc u2 (.a(w[1]), .y(w[2]));
        assign {w[3][3:2], w[3][1:0], w[4]} = {w[2] + 4'd1, 4'd9};
        and g1 (s[1], a[0], a[1]);
        not g2 (s[2], s[1]);
        assign y = w[i];
        assign z = s[2];
      endmodule`);
    const at = (i: number) => signalValue(circuit, 'y', { a: 3, i });
    expect([0, 1, 2, 3, 4, 5].map(at)).toEqual([3, 4, 5, 6, 9, 'x']);
    expect([1, 3].map((a) => signalValue(circuit, 'z', { a }))).toEqual([1, 0]);
  });

  it('carries values from turn to turn of a generate loop', () => {
    const circuit = circuitOf(`module t (input [7:0] a, output [7:0] y);
      wire [7:0] w [0:3];
      genvar k;
      assign w[0] = a;
      for (k = 0; k < 3; k = k + 1) begin : g assign w[k + 1] = w[k] * 2; end
      assign y = w[3];
    endmodule`);
    expect(signalValue(circuit, 'y', { a: 5 })).toBe(40);
  });

  it('is resolved by the type of its nets', () => {
    const circuit = circuitOf(`module t (input a, b, output y, z);
      wand w [0:1];
      supply1 s [0:1];
      assign w[1] = a, w[1] = b;
      assign y = w[1];
      assign z = s[0];
    endmodule`);
    expect([0, 1].map((b) => signalValue(circuit, 'y', { a: 1, b }))).toEqual([0, 1]);
    expect(signalValue(circuit, 'z', {})).toBe(1);
  });

  it('names the words that have no driver, or several', () => {
    const messages = (assigned: string) =>
      reading(`module t (input a, output y);
        wire [1:0] w [0:2];
        assign ${assigned};
      endmodule`).diagnostics.list.map(({ code, message }) => `${code}: ${message}`);
    expect(messages('w[0] = a, w[1] = a, y = w[2][1]')).toEqual([
      'net-undriven: w[2][1] is read but has no driver',
    ]);
    // Where there is an error, what has no driver may well be its fault.
    expect(messages('w[0] = a, w[1] = a, w[1][0] = a, y = w[2][1]')).toEqual([
      'net-multiply-driven: w[1][0] has 2 drivers; leave one of them',
    ]);
  });

  it.each([
    ['assign w[5] = a;', 'select-outside w[5]@3'],
    ['assign w[a] = a;', 'target-invalid w[a]@3'],
    ['assign w = a;', 'target-invalid w@3'],
    ['always @* w[1] = a;', 'target-invalid w[1]@3'],
    ['initial w[1] = 1;', 'target-invalid w[1]@3'],
    ['assign r[1] = a;', 'target-invalid r[1]@3'],
  ])('%s gives %s', (item, problem) => {
    const { problems } = reading(`module t (input a);
      wire [1:0] w [0:2]; reg [1:0] r [0:2];
      ${item}
    endmodule`);
    expect(problems).toEqual([problem]);
  });
});
