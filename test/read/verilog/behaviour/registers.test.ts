import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Edge, Priority } from '../../../../compiler/circuit/circuit.js';
import { NO_NET } from '../../../../compiler/circuit/ids.js';
import { bench, problemsOf } from './bench.js';

describe('an edge-sensitive always', () => {
  it('makes registers that take their data at the edge', () => {
    const { circuit, simulate, diagnostics } = bench(`
      input clk; input [3:0] d; reg [3:0] q;
      initial q = 4'd9;
      always @(posedge clk) q <= d + 1;
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.registers.count).toBe(4);
    expect([...circuit.registers.initial]).toEqual([1, 0, 0, 1]);
    const simulation = simulate();
    simulation.set({ clk: 0, d: 15 });
    expect(simulation.number('q')).toBe(9);
    simulation.tick();
    expect(simulation.number('q')).toBe(0);
  });

  it('captures on the falling edge for negedge', () => {
    const { circuit, simulate } = bench(`
      input clk, d; reg q; always @(negedge clk) q <= d;`);
    expect(circuit.registers.edge[0]).toBe(Edge.Falling);
    const simulation = simulate();
    simulation.set({ clk: 0, d: 1 });
    simulation.set({ clk: 1 });
    expect(simulation.bits('q')).toBe('x');
    simulation.set({ clk: 0 });
    expect(simulation.bits('q')).toBe('1');
  });

  it('may have its event control inside of a block', () => {
    const { circuit, diagnostics } = bench(
      'input clk, d; reg q; always begin @(posedge clk) q <= d; end',
    );
    expect(diagnostics).toEqual([]);
    expect(circuit.registers.count).toBe(1);
  });

  it('reads its clock as it is after the edge', () => {
    const simulation = bench('input clk; reg q; always @(posedge clk) q <= clk;').simulate();
    simulation.set({ clk: 0 });
    simulation.tick();
    expect(simulation.bits('q')).toBe('1');
  });

  it('holds what is not assigned by a multiplexer with the own value', () => {
    const simulation = bench(`
      input clk, en; input [1:0] d; reg [1:0] q;
      initial q = 2'd2;
      always @(posedge clk) if (en) q <= d;
    `).simulate();
    simulation.set({ clk: 0, en: 0, d: 1 });
    simulation.tick();
    expect(simulation.number('q')).toBe(2);
    simulation.set({ en: 1 });
    simulation.tick();
    expect(simulation.number('q')).toBe(1);
  });

  it('lets all non-blocking assignments see the values before the edge', () => {
    const simulation = bench(`
      input clk; reg a, b;
      initial {a, b} = 2'b10;
      always @(posedge clk) begin a <= b; b <= a; end
    `).simulate();
    simulation.set({ clk: 0 });
    simulation.tick();
    expect(simulation.bits('a') + simulation.bits('b')).toBe('01');
  });

  it('lets blocking assignments be read at once', () => {
    const simulation = bench(`
      input clk; input [3:0] d; reg [3:0] t, q;
      always @(posedge clk) begin t = d + 1; t = t + t; q <= t; end
    `).simulate();
    simulation.set({ clk: 0, d: 3 });
    simulation.tick();
    expect(simulation.number('q')).toBe(8);
    expect(simulation.number('t')).toBe(8);
  });

  it('lets the last of several non-blocking assignments win', () => {
    const simulation = bench(`
      input clk, c; input d; reg q;
      always @(posedge clk) begin q <= d; if (c) q <= ~d; end
    `).simulate();
    simulation.set({ clk: 0, c: 0, d: 1 });
    simulation.tick();
    expect(simulation.bits('q')).toBe('1');
    simulation.set({ c: 1 });
    simulation.tick();
    expect(simulation.bits('q')).toBe('0');
  });

  it('makes no register of a loop index, which several processes may share', () => {
    const { circuit, simulate, diagnostics } = bench(`
      input clk; input [3:0] d; reg [3:0] q, r; integer i;
      always @(posedge clk) for (i = 0; i < 4; i = i + 1) q[i] <= d[3 - i];
      always @(posedge clk) if (d[0]) for (i = 0; i < 4; i = i + 1) r[i] <= q[i];
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.registers.count).toBe(8);
    const simulation = simulate();
    simulation.set({ clk: 0, d: 0b0001 });
    simulation.tick();
    simulation.tick();
    expect(simulation.bits('q')).toBe('1000');
    expect(simulation.bits('r')).toBe('1000');
  });

  it('may share a loop index with others where `disable` leaves the loop', () => {
    const first = (name: string, target: string) => `begin : ${name}
      ${target} 8;
      for (i = 0; i < 8; i = i + 1) if (d[i]) begin ${target} i; disable ${name}; end
    end`;
    const { simulate, diagnostics, circuit } = bench(`
      input clk; input [7:0] d; reg [3:0] y, q; reg [7:0] r; integer i;
      always @* ${first('now', 'y =')}
      always @(posedge clk) ${first('later', 'q <=')}
      always @(posedge clk) for (i = 0; i < 8; i = i + 1) r[i] <= d[7 - i];
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.registers.count).toBe(12);
    const simulation = simulate();
    simulation.set({ clk: 0, d: 0b00101000 });
    simulation.tick();
    expect(['y', 'q', 'r'].map((name) => simulation.number(name))).toEqual([3, 3, 0b00010100]);
    simulation.set({ d: 0 });
    expect([simulation.number('y'), simulation.number('q')]).toEqual([8, 3]);
  });
});

describe('asynchronous controls', () => {
  const forms: readonly (readonly [string, string, string])[] = [
    ['posedge rst', 'rst', '1'],
    ['posedge rst', "rst == 1'b1", '1'],
    ['posedge rst', 'rst != 0', '1'],
    ['negedge rst', '!rst', '0'],
    ['negedge rst', '~rst', '0'],
    ['negedge rst', "rst == 1'b0", '0'],
    ['negedge rst', "1'b1 !== rst", '0'],
  ];
  it.each(forms)('are found in `%s` with `if (%s)`', (event, test, active) => {
    const { circuit, simulate, diagnostics } = bench(`
      input clk, rst; input [1:0] d; reg [1:0] q;
      always @(posedge clk or ${event}) if (${test}) q <= 2'b01; else q <= d;
    `);
    expect(diagnostics).toEqual([]);
    const { set, reset } = circuit.registers;
    expect([set[0] !== NO_NET, reset[0] !== NO_NET]).toEqual([true, false]);
    expect([set[1] !== NO_NET, reset[1] !== NO_NET]).toEqual([false, true]);
    const simulation = simulate();
    simulation.set({ clk: 0, d: 2, rst: active });
    expect(simulation.number('q')).toBe(1);
    simulation.tick();
    expect(simulation.number('q')).toBe(1);
    simulation.set({ rst: active === '1' ? 0 : 1 });
    expect(simulation.number('q')).toBe(1);
    simulation.tick();
    expect(simulation.number('q')).toBe(2);
  });

  it('may be tested by the conditional operator, in blocks, or several times', () => {
    const { circuit, simulate, diagnostics } = bench(`
      input clk, rst, d; reg q, r, s;
      always @(posedge rst, posedge clk) begin : both
        q <= rst ? 1'b0 : d;
        if (rst) r <= 1'b1; else r <= d;
        s <= d & ~rst;
      end
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.registers.count).toBe(3);
    const simulation = simulate();
    simulation.set({ clk: 0, d: 1, rst: 1 });
    expect(['q', 'r', 's'].map((name) => simulation.bits(name)).join('')).toBe('010');
  });

  it('have the priority of their tests, whatever the order of the event list', () => {
    for (const [first, second, wins] of [
      ['rst', 'pre', Priority.ResetWins],
      ['pre', 'rst', Priority.SetWins],
    ] as const) {
      const value = { rst: "1'b0", pre: "1'b1" };
      const { circuit, simulate, diagnostics } = bench(`
        input clk, rst, pre, d; reg q;
        always @(posedge pre or posedge clk or posedge rst)
          if (${first}) q <= ${value[first]};
          else if (${second}) q <= ${value[second]};
          else q <= d;
      `);
      expect(diagnostics).toEqual([]);
      expect(circuit.registers.priority[0]).toBe(wins);
      const simulation = simulate();
      simulation.set({ clk: 0, rst: 1, pre: 1, d: 0 });
      expect(simulation.number('q')).toBe(first === 'pre' ? 1 : 0);
    }
  });

  it('may be tested in a task or a function', () => {
    const { simulate, diagnostics } = bench(`
      input clk, rst, pre, d; reg q;
      function isPreset(input any); isPreset = pre; endfunction
      task step; if (rst) q <= 0; else if (isPreset(0)) q <= 1; else q <= d; endtask
      always @(posedge pre or posedge clk or posedge rst) step;
    `);
    expect(diagnostics).toEqual([]);
    const simulation = simulate();
    const qWith = (inputs: Record<string, number>) => {
      simulation.set(inputs);
      return simulation.number('q');
    };
    expect(qWith({ clk: 0, rst: 0, pre: 1, d: 0 })).toBe(1);
    expect(qWith({ rst: 1 })).toBe(0);
    expect(qWith({ rst: 0, pre: 0, d: 1 })).toBe(0);
    simulation.tick();
    expect(simulation.number('q')).toBe(1);
  });

  it('may be bits of one vector with the clock', () => {
    const { circuit, simulate, diagnostics } = bench(`
      input [1:0] c; input d; reg q;
      always @(posedge c[1] or negedge c[0]) if (!c[0]) q <= 0; else q <= d;
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.registers.reset[0]).not.toBe(NO_NET);
    const simulation = simulate();
    for (const [c, q] of [
      [0b00, 0],
      [0b01, 0],
      [0b11, 1],
      [0b01, 1],
      [0b00, 0],
    ] as const) {
      simulation.set({ c, d: 1 });
      expect(simulation.number('q')).toBe(q);
    }
  });

  it('keep the clock from bits that they leave alone', () => {
    const simulation = bench(`
      input clk, rst, d; reg q, r;
      initial {q, r} = 2'b11;
      always @(posedge clk or posedge rst)
        if (rst) q <= 0; else begin q <= d; r <= d; end
    `).simulate();
    simulation.set({ clk: 0, rst: 1, d: 0 });
    simulation.tick();
    expect(simulation.bits('r')).toBe('1');
    simulation.set({ rst: 0 });
    simulation.tick();
    expect(simulation.bits('r')).toBe('0');
  });

  it('hold a bit that only they ever set', () => {
    const simulation = bench(`
      input clk, rst, d; reg q, r;
      always @(posedge clk or posedge rst) if (rst) begin q <= 0; r <= 1; end else q <= d;
    `).simulate();
    simulation.set({ clk: 0, rst: 1, d: 0 });
    simulation.set({ rst: 0 });
    simulation.tick();
    expect(simulation.bits('r')).toBe('1');
  });

  it('agree with a model of three controls that alternate between set and reset', () => {
    const { simulate, diagnostics } = bench(`
      input clk, a, b, c, d; reg q;
      always @(posedge clk or posedge a or negedge b or posedge c)
        if (a) q <= 1; else if (!b) q <= 0; else if (c) q <= 1; else q <= d;
    `);
    expect(diagnostics).toEqual([]);
    const bit = fc.nat(1);
    fc.assert(
      fc.property(fc.array(fc.record({ a: bit, b: bit, c: bit, d: bit })), (rows) => {
        const simulation = simulate();
        simulation.set({ clk: 0, a: 1, b: 1, c: 0, d: 0 });
        let q = 1;
        const settle = (row: { a: number; b: number; c: number }): void => {
          if (row.a) q = 1;
          else if (!row.b) q = 0;
          else if (row.c) q = 1;
        };
        for (const row of rows) {
          simulation.set(row);
          settle(row);
          expect(simulation.number('q')).toBe(q);
          simulation.tick();
          if (!row.a && row.b && !row.c) q = row.d;
          expect(simulation.number('q')).toBe(q);
        }
      }),
      { seed: 30, numRuns: 40 },
    );
  });

  it('load what is no constant, between a reset before and a preset after', () => {
    const { simulate, diagnostics } = bench(`
      input clk, rst, load, keep, pre; input [1:0] d; reg [1:0] q; reg r;
      always @(negedge pre or posedge load or posedge clk or negedge rst)
        if (!rst) begin q <= 2'b01; r <= 0; end
        else if (load) begin q <= d; if (!keep) r <= d[0] ^ d[1]; end
        else if (!pre) begin q <= 2'b10; r <= 1; end
        else begin q <= q + 1; r <= !r; end
    `);
    expect(diagnostics.map(({ code }) => code)).toEqual(['sensitivity-incomplete']);
    const bit = fc.nat(1);
    const row = fc.record({ rst: bit, load: bit, keep: bit, pre: bit, d: fc.nat(3) });
    fc.assert(
      fc.property(fc.array(row), (rows) => {
        const simulation = simulate();
        const start = { rst: 0, load: 0, keep: 0, pre: 1, d: 0 };
        simulation.set({ clk: 0, ...start });
        let [q, r] = [1, 0];
        for (const inputs of [start, ...rows]) {
          const { rst, load, keep, pre, d } = inputs;
          if (!rst) [q, r] = [1, 0];
          else if (load) [q, r] = [d, keep ? r : (d >> 1) ^ (d & 1)];
          else if (!pre) [q, r] = [2, 1];
          simulation.set(inputs);
          expect([simulation.number('q'), simulation.number('r')]).toEqual([q, r]);
          simulation.tick();
          if (rst && !load && pre) [q, r] = [(q + 1) & 3, 1 - r];
          expect([simulation.number('q'), simulation.number('r')]).toEqual([q, r]);
        }
      }),
      { seed: 31, numRuns: 40 },
    );
  });

  it('reset a whole vector by a task, a loop and a constant of another width', () => {
    const simulation = bench(`
      input clk, rst; reg [3:0] q, r, s; integer i;
      task clear; begin q <= 4'hA; end endtask
      always @(posedge clk or negedge rst)
        if (!rst) begin
          clear;
          for (i = 0; i < 4; i = i + 1) r[i] <= i[0];
          s <= 1;
        end else begin q <= q + 1; r <= r + 1; s <= s + 1; end
    `).simulate();
    simulation.set({ clk: 0, rst: 0 });
    expect(['q', 'r', 's'].map((name) => simulation.bits(name))).toEqual(['1010', '1010', '0001']);
  });
});

describe('an edge-sensitive always is refused', () => {
  const declarations = 'input clk, rst, d; wire w; reg q, r;';
  const refusals: readonly (readonly [string, string, string])[] = [
    ['always @(posedge clk or rst) q <= d;', 'not-supported', 'rst'],
    ['always @(posedge clk or posedge rst) q <= d;', 'not-supported', 'posedge clk or posedge rst'],
    [
      'always @(posedge clk or posedge rst) if (rst) q <= clk; else q <= d;',
      'not-supported',
      'posedge clk or posedge rst',
    ],
    ['always @(posedge clk or negedge clk) q <= d;', 'not-supported', 'posedge clk or negedge clk'],
    ['always @(posedge clk) fork q <= d; join', 'not-supported', ''],
    ['always @(posedge clk) q <= @(posedge d) rst;', 'not-supported', ''],
    ['always @(posedge clk) w <= d;', 'target-invalid', 'w'],
    ['always @(posedge clk) begin q <= d; @(posedge clk) r <= d; end', 'not-supported', ''],
    ['always q = ~q;', 'not-supported', ''],
    ['always @(posedge clk) wait (d) q <= d;', 'not-supported', ''],
    ['always @(posedge clk) forever q <= d;', 'not-supported', ''],
    ['always @(posedge clk) force q = d;', 'not-supported', ''],
    ['always @(posedge clk) while (d) q <= d;', 'loop-unbounded', 'd'],
    ['always @(posedge clk) while (1) q <= d;', 'loop-unbounded', '1'],
    ['always @(posedge clk) repeat (70000) q <= d;', 'loop-unbounded', '70000'],
    ['always @(posedge clk) repeat (d) q <= d;', 'constant-required', 'd'],
    ['always @(posedge clk) disable other;', 'not-supported', 'disable other;'],
    ['always @(posedge clk) $readmemh("f", q);', 'not-supported', '$readmemh("f", q);'],
    ['always @(posedge clk) $unknown(q);', 'not-supported', '$unknown(q);'],
    ['always @(posedge clk) $display(q);', 'task-ignored', '$display(q);'],
  ];
  it.each(refusals)('%s', (text, code, at) => {
    const problems = problemsOf(`${declarations}\n${text}`);
    expect(problems.map((problem) => [problem.code, problem.at])).toEqual([[code, at]]);
  });

  it('where a control loads what is not constant, at the assignment', () => {
    const [problem, ...others] = bench(`
      input clk, load, d; reg q;
      always @(posedge clk or posedge load)
        if (load) q <= d; else q <= 0;
    `).diagnostics;
    expect(others).toEqual([]);
    expect(problem!.code).toBe('not-supported');
    expect(problem!.message).toContain('`posedge load`');
    expect(problem!.span!.source.place(problem!.span!.start)).toEqual({ line: 5, column: 19 });
  });

  it('where the test and the edge disagree, at the assignment', () => {
    const problems = problemsOf(`
      input clk, rst, d; reg q;
      always @(posedge clk or posedge rst) if (!rst) q <= 0; else q <= d;
    `);
    expect(problems.map(({ code }) => code)).toEqual(['not-supported']);
  });
});
