import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { powerUpMemory } from '../../compiler/circuit/powerUpMemory.js';
import { designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { createEngine } from '../../compiler/engines.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { netsOf, signalValue } from '../read/verilog/elaborate/reading.js';
import { randomRows, responseOf } from '../support/responses.js';
import { circuitOfText, reading } from './circuits.js';

// Hierarchical names reach memories too: IEEE 1364-2005, 12.5 and 12.6, and 17.2.9 for data files.
// Where several modules give a word its value, the order of `initial` blocks is open (clause 9.9.1);
// here that of the memory comes first, then the others from inside out and in the order of the text.

async function responsesOf(text: string, threeValued: boolean): Promise<Uint32Array[]> {
  const circuit = circuitOfText(text);
  const design = designOf(circuit, { threeValued });
  expect(design.layout.memories).toHaveLength(1);
  const rows = randomRows(design.layout, 5, 200);
  const engines = await Promise.all(
    (['reference', 'wasm'] as const).map((name) => createEngine(design, name)),
  );
  return engines.map((engine) => {
    engine.reset(powerUpState(circuit, 'zero'));
    engine.loadMemory(powerUpMemory(circuit.memories, threeValued, 'zero', 0));
    return responseOf(engine, 200, rows);
  });
}

const ports = 'input clk, we, input [7:0] a, b, d, output [7:0] q, r';
/** What the module around and the module inside do with the memory, by its name in each. */
const around = (m: string) => `
  always @(posedge clk) if (we) begin ${m}[a] <= d; ${m}[a + 1][3:0] <= d[7:4]; end
  assign q = ${m}[b];`;
const inside = (m: string) => `
  always @(posedge clk) if (b[0]) ${m}[b] <= a;
  assign r = ${m}[a ^ b];`;
const store = "reg [7:0] m [0:255]; initial m[3] = 8'h55;";

const together = `module t (${ports}); ${store} ${inside('m')} ${around('m')}
  initial m[4] = 8'haa; endmodule`;

/** The same memory, named from another module than the one that declares it. */
const apart: [string, string][] = [
  [
    'in an instance',
    `module ram (${ports.replace(', r', ', output [7:0] r')}); endmodule
    module leaf (input clk, input [7:0] a, b, output [7:0] r); ${store} ${inside('m')} endmodule
    module t (${ports}); leaf u (clk, a, b, r); ${around('u.m')} initial u.m[4] = 8'haa; endmodule`,
  ],
  [
    'two levels down',
    `module leaf (input clk, input [7:0] a, b, output [7:0] r); ${store} ${inside('m')} endmodule
    module mid (input clk, input [7:0] a, b, output [7:0] r); leaf v (clk, a, b, r); endmodule
    module t (${ports}); mid u (clk, a, b, r); ${around('u.v.m')}
      initial u.v.m[4] = 8'haa; endmodule`,
  ],
  [
    'in the module around',
    `module leaf (input clk, input [7:0] a, b, output [7:0] r); ${inside('t.m')}
      initial t.m[4] = 8'haa; endmodule
    module t (${ports}); ${store} leaf u (clk, a, b, r); ${around('m')} endmodule`,
  ],
  [
    'in an instance beside, which comes later',
    `module leaf (input clk, input [7:0] a, b, output [7:0] r); ${inside('s.m')}
      initial s.m[4] = 8'haa; endmodule
    module side; ${store} endmodule
    module mid (input clk, input [7:0] a, b, output [7:0] r);
      leaf v (clk, a, b, r); side s (); endmodule
    module t (${ports}); mid u (clk, a, b, r); ${around('u.s.m')} endmodule`,
  ],
];
apart[0]![1] = apart[0]![1].replace(/module ram.*?endmodule/s, '');

describe('a memory of another module', async () => {
  const wanted = [await responsesOf(together, false), await responsesOf(together, true)];

  it.each(apart)('is written and read %s', async (_, text) => {
    for (const threeValued of [false, true]) {
      const [expected] = wanted[Number(threeValued)]!;
      for (const response of await responsesOf(text, threeValued)) {
        expect(response).toEqual(expected);
      }
    }
  });
});

/** The first bytes of a memory's words that are given, by address. */
function givenWords({ memories }: Circuit, name: string): Record<number, number> {
  const { initial } = memories.find((memory) => memory.name === name)!;
  const given: Record<number, number> = {};
  for (let at = 0; at < (initial?.length ?? 0); at += 2) {
    if (initial![at + 1] === 0) given[at / 2] = initial![at]!;
  }
  return given;
}

const ram = `module ram (input [9:0] a, output [7:0] q); parameter V = 1;
  reg [7:0] m [0:1023]; initial m[7] = V; assign q = m[a]; endmodule`;

describe('the contents of a memory of another module', () => {
  it('are of one instance each', () => {
    const files = { f: '@5 2a 2b', g: '@6 9' };
    const circuit = circuitOfText(
      `${ram} module pair (input [9:0] a, output [7:0] p, q); ram x (a, p), y (a, q);
        initial x.m[7] = 8'h11; endmodule
      module t (input [9:0] a, output [7:0] o, p, q, r);
        pair n (a, o, p); pair w (a, q, r);
        initial begin $readmemh("f", n.y.m); $readmemh("g", w.x.m); w.x.m[7] = w.x.m[6] + n.y.m[7]; end
      endmodule`,
      { files },
    );
    expect(givenWords(circuit, 'n.x.m')).toEqual({ 7: 0x11 });
    expect(givenWords(circuit, 'n.y.m')).toEqual({ 5: 0x2a, 6: 0x2b, 7: 1 });
    expect(givenWords(circuit, 'w.x.m')).toEqual({ 6: 9, 7: 10 });
    expect(givenWords(circuit, 'w.y.m')).toEqual({ 7: 1 });
  });

  it.each([
    ['of those at one depth the last', 'far #(1) x (); own u (c, d, q); far #(2) y ();', 2],
    ['the one further out before it', 'far #(1) x (); own u (c, d, q); deep #(2) y ();', 1],
    ['the one further out behind it', 'deep #(2) x (); own u (c, d, q); far #(1) y ();', 1],
    ['the module around', 'deep #(2) x (); far #(3) y (); own u (c, d, q); SAY', 1],
    ['another than its own', 'own u (c, d, q); if (1) begin : g deep #(3) x (); end', 3],
  ])('come from several modules in the order of those of registers: %s', (_, items, expected) => {
    const firstValue = (declaration: string, name: string, index: string): number => {
      const circuit = circuitOfText(
        `module own (input c, input [9:0] d, output [1:0] q); reg ${declaration};
          initial ${name} = 0; assign q = v${index}; always @(posedge c) v${index} <= d; endmodule
        module far; parameter P = 0; initial t.u.${name} = P; endmodule
        module deep; parameter P = 0; far #(P) f (); endmodule
        module t (input c, input [9:0] d, output [1:0] q);
          ${items.replace('SAY', `initial u.${name} = 1;`)} endmodule`,
        { top: 't' },
      );
      if (circuit.memories.length > 0) return givenWords(circuit, 'u.v')[5]!;
      const { output, initial } = circuit.registers;
      const [low, high] = netsOf(circuit, `u.${name}`).map((net) => initial[output.indexOf(net)]!);
      return low! + 2 * high!;
    };
    const values = [
      firstValue('[1:0] v', 'v', ''),
      firstValue('[1:0] v [0:7]', 'v[5]', '[d]'),
      firstValue('[1:0] v [0:1023]', 'v[5]', '[d]'),
    ];
    expect(values).toEqual([expected, expected, expected]);
  });

  it('reach elements of arrays of instances and of generate loops', () => {
    const circuit = circuitOfText(
      `${ram} module t (input [9:0] a, output [31:0] q);
        ram u [1:0] (a, q[15:0]);
        genvar i; for (i = 0; i < 2; i = i + 1) begin : g ram v (a, q[16 + 8 * i +: 8]); end
        initial begin u[1].m[0] = 3; $readmemb("f", g[1].v.m, 9, 8); end
      endmodule`,
      { files: { f: '1 10' } },
    );
    expect(givenWords(circuit, 'u[0].m')).toEqual({ 7: 1 });
    expect(givenWords(circuit, 'u[1].m')).toEqual({ 0: 3, 7: 1 });
    expect(givenWords(circuit, 'g[0].v.m')).toEqual({ 7: 1 });
    expect(givenWords(circuit, 'g[1].v.m')).toEqual({ 7: 1, 8: 2, 9: 1 });
  });

  it('are taken where small arrays are registers, too', () => {
    const text = `module ram (input [1:0] a, output [7:0] q);
      reg [7:0] m [0:3]; initial m[2] = 8'h77; assign q = m[a]; endmodule
    module t (input [1:0] a, output [7:0] q, r);
      ram u (a, q), v (a, r);
      initial begin u.m[1] = 5; u.m[2] = 6; $readmemh("f", v.m, 3, 3); end endmodule`;
    const { circuit, messages } = reading(text, { files: { f: '9' } });
    expect([messages, circuit!.memories]).toEqual([[], []]);
    const words = (path: string) => [0, 1, 2, 3].map((a) => signalValue(circuit!, path, { a }));
    expect(words('q')).toEqual(['x', 5, 6, 'x']);
    expect(words('r')).toEqual(['x', 'x', 0x77, 9]);
  });
});

describe('a memory that another module writes as only registers can be written', () => {
  const resetting = (depth: number) => `
    module ram (input clk, input [15:0] a, d, output [15:0] q);
      reg [15:0] m [0:${depth - 1}]; assign q = m[a]; endmodule
    module mid (input clk, input [15:0] a, d, output [15:0] q); ram v (clk, a, d, q); endmodule
    module t (input clk, go, input [15:0] a, d, output [15:0] q);
      mid u (clk, a, d, q);
      always @* if (go) u.v.m[2] = 0;
    endmodule`;

  it('is built from registers', () => {
    const { circuit, messages } = reading(resetting(32));
    expect(messages.filter((message) => message.includes('error'))).toEqual([]);
    expect([circuit!.memories.length, circuit!.latches.count]).toEqual([0, 16]);
  });

  it('is refused where its own module writes it, too', () => {
    const text = resetting(32).replace('assign q', 'always @(posedge clk) m[a] <= d; assign q');
    const { found, messages } = reading(text);
    expect(found).toContain('not-supported top.v 7:25');
    expect(messages.join()).toContain(
      'its own module writes it too, and registers have one process',
    );
  });

  it('is named where it is an array of registers with two drivers', () => {
    const text = resetting(4).replace('assign q', 'always @(posedge clk) m[a] <= d; assign q');
    const { messages } = reading(text.replaceAll('[15:0] a', '[1:0] a'));
    expect(messages.filter((message) => message.includes('drivers'))).toEqual([
      'top.v:6:7: error: u.v.m has 2 drivers; leave one of them [net-multiply-driven]',
    ]);
  });

  it('is said to do as a memory where clock edges alone write it', () => {
    const small = (own: string, far: string): string[] =>
      reading(`module m4 (input clk, input [1:0] a, input [3:0] d, output [3:0] q);
          reg [3:0] m [0:3]; ${own} assign q = m[a];
        endmodule
        module top (input clk, input [1:0] a, b, input [3:0] d, output [3:0] q);
          m4 u (clk, a, d, q); ${far}
        endmodule`).messages.filter((message) => message.includes('drivers'));
    const edge = 'always @(posedge clk) m[a] <= d;';
    const cure = 'or let it be a memory of 16 bits, with a port for each: --memories-from 16';
    const farEdge = 'always @(posedge clk) u.m[b] <= d;';
    expect(small(edge, farEdge).join()).toContain(`u.m has 2 drivers; leave one of them, ${cure}`);
    expect(small(`${edge} always @(negedge clk) m[d] <= a;`, '')).toHaveLength(1);
    expect(small(`${edge} always @(negedge clk) m[d] <= a;`, '').join()).toContain(cure);
    for (const level of ['always @* if (clk) m[d] = a;', edge.replace('posedge', '')]) {
      expect(small(`${edge} ${level}`, '').join()).toContain(
        'm has 2 drivers; leave one of them [',
      );
    }
    const diagnostics = new Diagnostics();
    const text = `module top (input clk, input [1:0] a, b, input [3:0] d, output [3:0] q);
      reg [3:0] m [0:3]; always @(posedge clk) m[a] <= d;
      always @(negedge clk) m[b] <= ~d; assign q = m[a]; endmodule`;
    const circuit = readNetlist([new Source('top.v', text)], { memoriesFrom: 16 }, diagnostics);
    expect(diagnostics.list).toEqual([]);
    expect(circuit!.memories[0]!.writes).toHaveLength(2);
  });

  it('is refused where it is too large for these', () => {
    expect(reading(resetting(8192)).found).toContain('not-supported top.v 7:25');
  });
});
