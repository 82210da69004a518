import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { GateKind } from '../../../../compiler/circuit/gates.js';
import { bench, problemsOf } from './bench.js';

const byte = fc.integer({ min: 0, max: 255 });

/** Checks `y` against a function of `a` and `b`, eight bits each. */
function agree(items: string, model: (a: number, b: number) => number, runs = 60): void {
  const { simulate, diagnostics } = bench(`input [7:0] a, b; reg [7:0] y;\n${items}`);
  expect(diagnostics).toEqual([]);
  const simulation = simulate();
  fc.assert(
    fc.property(byte, byte, (a, b) => {
      simulation.set({ a, b });
      expect(simulation.number('y')).toBe(model(a, b) & 0xff);
    }),
    { seed: 40, numRuns: runs },
  );
}

describe('a combinational always', () => {
  it('takes the branch that its condition selects', () => {
    agree('always @* if (a > b) y = a; else if (a == b) y = 7; else y = b - a;', (a, b) =>
      a > b ? a : a === b ? 7 : b - a,
    );
  });

  it('lets a later assignment win over an earlier one', () => {
    agree("always @* begin y = a; if (b[0]) y = b; if (b[1]) y[3:0] = 4'hF; end", (a, b) => {
      const y = b & 1 ? b : a;
      return b & 2 ? y | 15 : y;
    });
  });

  it('reads what it has assigned before', () => {
    agree(
      'always @(a or b) begin y = a + b; y = y * 3; y = y ^ a; end',
      (a, b) => ((a + b) * 3) ^ a,
    );
  });

  it('unrolls loops with constant bounds', () => {
    agree(
      `integer i; always @* begin
         y = 0;
         for (i = 0; i < 8; i = i + 1) y = y + (a[i] ? i : b[7 - i]);
       end`,
      (a, b) => {
        let y = 0;
        for (let i = 0; i < 8; i++) y += (a >> i) & 1 ? i : (b >> (7 - i)) & 1;
        return y;
      },
    );
    agree('always @* begin y = a; repeat (3) y = (y << 1) ^ b; end', (a, b) => {
      let y = a;
      for (let i = 0; i < 3; i++) y = (y << 1) ^ b;
      return y;
    });
    agree(
      'integer n; always @* begin y = a; n = 3; while (n > 0) begin y = y + b; n = n - 1; end end',
      (a, b) => a + 3 * b,
    );
  });

  it('selects by case items in order, with a default', () => {
    agree(
      `always @* case (a[2:0])
         0, 1: y = b;
         2: y = 5;
         3'd3, 3'd2: y = ~b;
         default: y = a;
       endcase`,
      (a, b) => [b, b, 5, ~b, a, a, a, a][a & 7]!,
    );
  });

  it('compares a wide subject with few labels one after another', () => {
    agree(
      "always @* case ({a, b}) 16'h0: y = 1; {8'd3, b}: y = b; {b, a}: y = 2; default: y = 3; endcase",
      (a, b) => (a === 0 && b === 0 ? 1 : a === 3 ? b : a === b ? 2 : 3),
      200,
    );
  });

  it('takes signals as labels of a constant subject', () => {
    agree(
      "always @* case (1'b1) a[7]: y = 1; b[7]: y = 2; a[0]: y = 3; default: y = 4; endcase",
      (a, b) => (a & 128 ? 1 : b & 128 ? 2 : a & 1 ? 3 : 4),
    );
  });

  it('extends case labels by their sign only if all are signed', () => {
    agree(
      'reg signed [3:0] s; always @* begin s = a[3:0]; case (s) -1: y = 1; 7: y = 2; default: y = 0; endcase end',
      (a) => ((a & 15) === 15 ? 1 : (a & 15) === 7 ? 2 : 0),
    );
    agree(
      "reg signed [3:0] s; always @* begin s = a[3:0]; case (s) 5'd15: y = 1; default: y = 0; endcase end",
      (a) => ((a & 15) === 15 ? 1 : 0),
    );
  });

  it('takes ? and z in casez, also x in casex, for bits that do not matter', () => {
    const model = (a: number, b: number): number => (a & 8 ? b : (a & 6) === 2 ? 1 : 9);
    agree(
      "always @* casez (a[3:0]) 4'b1???: y = b; 4'b?01z: y = 1; default: y = 9; endcase",
      model,
    );
    agree(
      "always @* casex (a[3:0]) 4'b1xxx: y = b; 4'bx01?: y = 1; default: y = 9; endcase",
      model,
    );
    agree(
      "always @* casez (a) 8'b1???_????: y = b; 8'b01??_??01: y = 2; default: y = 9; endcase",
      (a, b) => (a & 128 ? b : (a & 0xc3) === 0x41 ? 2 : 9),
    );
  });

  it('makes a multiplexer tree of a full table of constants', () => {
    const rows = Array.from({ length: 16 }, (_, i) => `${i}: y = ${(i * 37 + 11) & 255};`).join(
      ' ',
    );
    const items = `input [7:0] a, b; reg [7:0] y; always @* case (a[3:0]) ${rows} endcase`;
    agree(`always @* case (a[3:0]) ${rows} endcase`, (a) => (a & 15) * 37 + 11);
    const { circuit } = bench(items);
    expect(circuit.latches.count).toBe(0);
    expect(circuit.kind.filter((kind) => kind > GateKind.Buf).length).toBeLessThan(60);
  });

  it('assigns single bits and parts at variable places', () => {
    agree('always @* begin y = a; y[b[2:0]] = ~a[b[5:3]]; end', (a, b) => {
      const bit = 1 << (b & 7);
      return (a >> ((b >> 3) & 7)) & 1 ? a & ~bit : a | bit;
    });
    agree('always @* begin y = a; y[b[2:0] +: 3] = b[7:5]; end', (a, b) => {
      const at = b & 7;
      return (a & ~(7 << at)) | ((b >> 5) << at);
    });
    agree('always @* begin y = a; y[b[2:0] -: 3] = b[7:5]; end', (a, b) => {
      const at = b & 7;
      return (a & ~((7 << at) >> 2)) | (((b >> 5) << at) >> 2);
    });
  });

  it('selects and assigns in vectors whose numbers ascend or are negative', () => {
    agree(
      `reg [0:7] u; reg [3:-4] v; always @* begin
         u = a; v = 0;
         v[$signed(b[2:0])] = u[b[5:3]];
         v[3:2] = u[1:2];
         y = v;
       end`,
      (a, b) => {
        const index = b & 4 ? (b & 7) - 8 : b & 7;
        const v = ((a >> (7 - ((b >> 3) & 7))) & 1) << (index + 4);
        return (v & 0x3f) | (((a >> 5) & 3) << 6);
      },
    );
    agree(
      'reg [0:7] u; always @* begin u = a; y = u[b[1:0] +: 3]; end',
      (a, b) => (a >> (5 - (b & 3))) & 7,
    );
    agree("reg [0:7] u; always @* begin u = a; u[b[2:0] -: 2] = 2'b10; y = u; end", (a, b) => {
      const right = 7 - (b & 7);
      return (a & ~(3 << right)) | (2 << right);
    });
  });

  it('assigns to concatenations', () => {
    agree('reg c; always @* begin {c, y[7:4], y[3:0]} = a + b; y[0] = c; end', (a, b) => {
      return ((a + b) & 0xfe) | ((a + b) >> 8);
    });
  });

  it('inlines functions and tasks', () => {
    agree(
      `function [7:0] pick; input [7:0] p, q; input s; begin
         pick = p; if (s) pick = q;
       end endfunction
       task both; input [7:0] p; output [7:0] sum; inout [7:0] count; begin
         sum = p + count; count = count + 1;
       end endtask
       reg [7:0] n, m;
       always @* begin
         n = b; both(a, m, n); both(m, m, n);
         y = pick(m, n, a[0]) + pick(a, b, b[0]);
       end`,
      (a, b) => {
        const m = a + b + b + 1;
        return (a & 1 ? b + 2 : m) + (b & 1 ? b : a);
      },
    );
  });

  it('gives each call of a function its own variables', () => {
    agree(
      'function [7:0] twice(input [7:0] v); twice = v + v; endfunction ' +
        'always @* y = twice(twice(a) + twice(b));',
      (a, b) => 4 * (a + b),
    );
  });

  it('leaves named blocks by disable', () => {
    agree(
      `integer i; always @* begin : all
         y = 8;
         begin : search
           for (i = 0; i < 8; i = i + 1) begin : step
             if (b[i]) disable step;
             if (a[i]) begin y = i; disable search; end
           end
         end
         if (a == b) disable all;
         y = y + 16;
       end`,
      (a, b) => {
        let y = 8;
        for (let i = 7; i >= 0; i--) if (((a & ~b) >> i) & 1) y = i;
        return a === b ? y : y + 16;
      },
    );
    agree(
      'always @* begin : all y = 1; case (a[1:0]) 0: disable all; 2: if (b[0]) disable all; endcase y = 2; end',
      (a, b) => ((a & 3) === 0 || ((a & 3) === 2 && b & 1) ? 1 : 2),
    );
    agree(
      'always @* begin : all y = 1; case (a) 3: disable all; 200: if (b[0]) disable all; endcase y = 2; end',
      (a, b) => (a === 3 || (a === 200 && b & 1) ? 1 : 2),
    );
  });

  it('reads and writes the words of an array', () => {
    agree(
      `reg [7:0] m [2:5]; always @* begin
         m[2] = a; m[3] = b; m[4] = a ^ b; m[5] = 9;
         m[a[2:0]][b[2:0]] = 1;
         y = m[b[1:0] + 2];
       end`,
      (a, b) => {
        const m = [a, b, a ^ b, 9];
        const at = (a & 7) - 2;
        if (at >= 0 && at < 4) m[at]! |= 1 << (b & 7);
        return m[b & 3]!;
      },
    );
  });

  it('merges branches as a multiplexer does where a condition is x', () => {
    const simulation = bench(`
      input s; reg [1:0] y, z;
      always @* begin
        if (s) y = 2'b10; else y = 2'b11;
        case (s) 0: z = 2'b10; 1: z = 2'b11; endcase
      end
    `).simulate();
    simulation.set({ s: 'x' });
    expect(simulation.bits('y')).toBe('1x');
    expect(simulation.bits('z')).toBe('1x');
  });

  it('takes x as a value that does not matter', () => {
    const { circuit, diagnostics } = bench(`
      input [1:0] s; input a; reg y;
      always @* case (s) 0: y = a; 1: y = ~a; default: y = 1'bx; endcase
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.latches.count).toBe(0);
  });
});

describe('latches', () => {
  it('keep a variable that is not assigned on every path, without a warning if all is latched', () => {
    const { circuit, simulate, diagnostics } = bench(`
      input en, rst; input [3:0] d; reg [3:0] q;
      always @* if (rst) q = 0; else if (en) q = d + 1;
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.latches.count).toBe(4);
    const simulation = simulate();
    const steps = [
      [{ rst: 1, en: 0, d: 4 }, 0],
      [{ rst: 0, en: 0, d: 4 }, 0],
      [{ rst: 0, en: 1, d: 4 }, 5],
      [{ rst: 0, en: 1, d: 6 }, 7],
      [{ rst: 0, en: 0, d: 9 }, 7],
    ] as const;
    for (const [inputs, q] of steps) {
      simulation.set(inputs);
      expect(simulation.number('q')).toBe(q);
    }
  });

  it('start at their initial value', () => {
    const { circuit } = bench('input en, d; reg q; initial q = 1; always @* if (en) q = d;');
    expect(circuit.latches.initial[0]).toBe(1);
  });

  it('are warned of beside combinational results, once for each variable', () => {
    const problems = problemsOf(`
      input c; input [3:0] d; reg [3:0] q, y;
      always @* begin y = d; if (c) q = d; end
    `);
    expect(problems.map(({ code }) => code)).toEqual(['latch-inferred']);
    expect(problems[0]!.message).toContain('`q`');
  });

  it('are warned of in a case with gaps, at the assignment', () => {
    const { diagnostics, circuit } = bench(`
      input [1:0] s; input a; reg y;
      always @* case (s)
        0: y = a;
        1: y = ~a;
      endcase
    `);
    expect(circuit.latches.count).toBe(1);
    expect(diagnostics.map(({ code }) => code)).toEqual(['latch-inferred']);
    const { source, start } = diagnostics[0]!.span!;
    expect(source.place(start)).toEqual({ line: 6, column: 12 });
  });

  it('are not made where a case has an item for every value', () => {
    const items = 'input [1:0] s; input [7:0] w; input a; reg y, z;';
    const labels = Array.from({ length: 256 }, (_, i) => `${i}: z = a ^ s[${i & 1}];`).join('\n');
    for (const text of [
      'case (s) 0: y = a; 1, 2: y = ~a; 3: y = 0; endcase',
      `case (w) ${labels} endcase`,
      "casez (w) 8'b1???????: y = 0; 8'b0???????: y = a; endcase",
    ]) {
      const { circuit, diagnostics } = bench(`${items} always @* ${text}`);
      expect(diagnostics).toEqual([]);
      expect(circuit.latches.count).toBe(0);
    }
  });
});

describe('a level-sensitive event list', () => {
  it('is taken as complete, with a warning that names what it lacks', () => {
    const { diagnostics, simulate } = bench(`
      input [3:0] a, b; input c; reg [3:0] t, y;
      always @(a) begin t = a ^ b; y = c ? t : 0; end
    `);
    expect(diagnostics.map(({ code }) => code)).toEqual(['sensitivity-incomplete']);
    expect(diagnostics[0]!.message).toContain('`b`, `c`');
    const { source, start, end } = diagnostics[0]!.span!;
    expect(source.slice(start, end)).toBe('a');
    const simulation = simulate();
    simulation.set({ a: 5, b: 3, c: 1 });
    expect(simulation.number('y')).toBe(6);
  });

  it('may name bits and parts', () => {
    expect(problemsOf('input [3:0] a; reg y; always @(a[3:2] or a[0]) y = a[0] & a[3];')).toEqual(
      [],
    );
  });
});

describe('a case label', () => {
  it.each([
    ["case (a) 2'b0x: y = 1; default: y = 0; endcase", "2'b0x"],
    ["casez (a) 2'bx?: y = 1; default: y = 0; endcase", "2'bx?"],
  ])('with x is refused in %s', (text, at) => {
    const problems = problemsOf(`input [1:0] a; reg y; always @* ${text}`);
    expect(problems.map((problem) => [problem.code, problem.at])).toEqual([['not-supported', at]]);
  });
});
