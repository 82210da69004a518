import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  evaluate as evaluateNet,
  gatesOf,
  netsOf,
  signalValue,
} from '../verilog/elaborate/reading.js';
import { cellCircuit, cellDesign, readFiles } from './reading.js';

const names = ['A', 'B', 'C', 'D'];

/** A function as a tree, apart from how it is written. */
type Tree =
  | { readonly op: 'pin'; readonly pin: number }
  | { readonly op: 'value'; readonly value: number }
  | { readonly op: 'not'; readonly parts: readonly Tree[]; readonly style: number }
  | { readonly op: 'and' | 'or' | 'xor'; readonly parts: readonly Tree[]; readonly style: number };

const { tree } = fc.letrec<{ tree: Tree }>((tie) => {
  const parts = (count: number) => fc.array(tie('tree'), { minLength: count, maxLength: 3 });
  const style = fc.nat(2);
  return {
    tree: fc.oneof(
      { maxDepth: 4, withCrossShrink: true },
      fc.record({ op: fc.constant('pin' as const), pin: fc.nat(names.length - 1) }),
      fc.record({ op: fc.constant('value' as const), value: fc.nat(1) }),
      fc.record({
        op: fc.constant('not' as const),
        parts: fc.tuple(tie('tree')),
        style,
      }),
      fc.record({
        op: fc.constantFrom('and' as const, 'or' as const, 'xor' as const),
        parts: parts(2),
        style,
      }),
    ),
  };
});

function evaluate(node: Tree, levels: number): number {
  switch (node.op) {
    case 'pin':
      return (levels >> node.pin) & 1;
    case 'value':
      return node.value;
    case 'not':
      return 1 - evaluate(node.parts[0]!, levels);
    case 'and':
      return Math.min(...node.parts.map((part) => evaluate(part, levels)));
    case 'or':
      return Math.max(...node.parts.map((part) => evaluate(part, levels)));
    case 'xor':
      return node.parts.reduce((sum, part) => sum ^ evaluate(part, levels), 0);
  }
}

// How tightly each kind binds; operands that bind less need parentheses.
const strength = { or: 1, and: 2, xor: 3, not: 4, pin: 5, value: 5 } as const;
const signs = { and: ['*', ' & ', ' '], or: [' + ', '|', ' | '], xor: ['^', ' ^ ', '^ '] } as const;

/** The tree with no more parentheses than needed, its operators in the spelling of each node. */
function write(node: Tree): string {
  if (node.op === 'pin') return names[node.pin]!;
  if (node.op === 'value') return `${node.value}`;
  const parts = node.parts.map((part) =>
    strength[part.op] > strength[node.op] ? write(part) : `(${write(part)})`,
  );
  if (node.op !== 'not') return parts.join(signs[node.op][node.style]);
  return node.style === 0 ? `!${parts[0]}` : `${parts[0]}'`;
}

/** A cell with the pins A to D and a function at Y. */
const cellWith = (text: string): string =>
  `pin (${names.join(', ')}) { direction : input; }
   pin (Y) { direction : output; function : "${text}"; }`;

describe('the function of an output', () => {
  it('is what the text says, for all values of its pins', () => {
    fc.assert(
      fc.property(tree, (node) => {
        const circuit = cellCircuit(cellWith(write(node)));
        for (let levels = 0; levels < 16; levels++) {
          const inputs = Object.fromEntries(names.map((name, bit) => [name, (levels >> bit) & 1]));
          expect(signalValue(circuit, 'Y', inputs)).toBe(evaluate(node, levels));
        }
      }),
      { seed: 20260102, numRuns: 300 },
    );
  });

  // A cell's table counts, not its text: x where, and only where, the value depends on what is x.
  it('is x only where it depends on an x', () => {
    fc.assert(
      fc.property(tree, (node) => {
        const circuit = cellCircuit(cellWith(write(node)));
        const nets = names.map((name) => netsOf(circuit, name)[0]!);
        const [y] = netsOf(circuit, 'Y');
        for (let code = 0; code < 3 ** names.length; code++) {
          const values = names.map((_, pin) => Math.floor(code / 3 ** pin) % 3);
          const meant = [...Array(16).keys()].filter((levels) =>
            values.every((value, pin) => value === 2 || value === ((levels >> pin) & 1)),
          );
          const results = new Set(meant.map((levels) => evaluate(node, levels)));
          const expected = results.size > 1 ? 2 : [...results][0];
          const given = new Map(nets.map((net, pin) => [net, values[pin]!]));
          expect(evaluateNet(circuit, y!, given)).toBe(expected);
        }
      }),
      { seed: 20260103, numRuns: 150 },
    );
  });

  it('of a multiplexer agrees with a primitive of the same cell', () => {
    const primitive = `primitive choice (Y, A, B, S); output Y; input A, B, S; table
      0 ? 0 : 0; 1 ? 0 : 1; ? 0 1 : 0; ? 1 1 : 1; 0 0 x : 0; 1 1 x : 1; endtable endprimitive`;
    const { circuit, problems } = readFiles([
      [
        't.v',
        `${primitive} module top(input a, b, s, output y, z);
           choice u(y, a, b, s); MUX m(.A(a), .B(b), .S(s), .Y(z)); endmodule`,
      ],
      [
        't.lib',
        `library (t) { cell (MUX) { pin (A, B, S) { direction : input; }
           pin (Y) { direction : output; function : "(A * !S) + (B * S)"; } } }`,
      ],
    ]);
    expect(problems).toEqual([]);
    expect(gatesOf(circuit!)).toEqual(['mux', 'mux']);
  });

  it.each([
    ['!(A & B & C)', ['nand']],
    ["(A + B + C)'", ['nor']],
    ['!(A ^ B)', ['xnor']],
    ['A * B', ['and']],
    ['!A', ['not']],
    ['A', ['buf']],
    ['!(A B + C D)', ['and', 'and', 'nor']],
    ['1', []],
  ])('%s becomes the gates one would draw', (text, gates) => {
    expect(gatesOf(cellCircuit(cellWith(text)))).toEqual(gates);
  });

  it('may name other outputs and internal pins', () => {
    const circuit = cellCircuit(`pin (A, B) { direction : input; }
      pin (S) { direction : output; function : "A ^ B"; }
      pin (N) { direction : internal; function : "!S"; }
      pin (Y) { direction : output; function : "N"; }`);
    expect([0, 1, 2, 3].map((i) => signalValue(circuit, 'Y', { A: i & 1, B: i >> 1 }))).toEqual([
      1, 0, 0, 1,
    ]);
  });

  it('means the same bit of each bus that it names', () => {
    const circuit = cellCircuit(`type (up) { bit_width : 3; bit_from : 0; bit_to : 2; }
      type (down) { bit_width : 3; bit_from : 5; bit_to : 3; downto : true; }
      bus (A) { bus_type : up; direction : input; }
      bus (B) { bus_type : down; direction : input; }
      pin (E) { direction : input; }
      bus (Y) { bus_type : up; direction : output; function : "(A ^ B) & E"; }`);
    expect(signalValue(circuit, 'Y', { A: 0b101, B: 0b001, E: 1 })).toBe(0b100);
    expect(signalValue(circuit, 'Y', { A: 0b101, B: 0b001, E: 0 })).toBe(0);
  });

  it('may name bits of buses', () => {
    const circuit = cellCircuit(`type (b) { bit_width : 2; downto : true; }
      bus (A) { bus_type : b; direction : input; }
      pin (Y) { direction : output; function : "A[1] & !A[0]"; }`);
    expect([0, 1, 2, 3].map((A) => signalValue(circuit, 'Y', { A }))).toEqual([0, 0, 1, 0]);
  });

  it('may name bits in the style of the library', () => {
    const { circuit, problems } = readFiles([
      ['t.v', 'module top(input [1:0] a, output y); C c(.A(a), .Y(y)); endmodule'],
      [
        't.lib',
        `library (t) { bus_naming_style : "%s_%d"; type (b) { bit_width : 2; downto : true; }
          cell (C) { bus (A) { bus_type : b; direction : input; }
            pin (Y) { direction : output; function : "A_1 & !A_0"; } } }`,
      ],
    ]);
    expect(problems).toEqual([]);
    expect([0, 1, 2, 3].map((a) => signalValue(circuit!, 'y', { a }))).toEqual([0, 0, 1, 0]);
  });

  it('means the member at the same place of each bundle', () => {
    const circuit = cellCircuit(`bundle (A) { members (A1, A2); direction : input; }
      bundle (B) { members (B1, B2); direction : input; }
      bundle (Y) { members (Y1, Y2); direction : output; function : "A & !B"; }`);
    const inputs = { A1: 1, A2: 1, B1: 0, B2: 1 };
    expect([signalValue(circuit, 'Y1', inputs), signalValue(circuit, 'Y2', inputs)]).toEqual([
      1, 0,
    ]);
  });

  it('of an input says nothing', () => {
    const circuit = cellCircuit(`pin (A) { direction : input; function : "!B"; }
      pin (Y) { direction : output; function : "A"; }`);
    expect(signalValue(circuit, 'Y', { A: 1 })).toBe(1);
  });
});

describe('a faulty function', () => {
  const problem = (statements: string): string => {
    const { problems } = cellDesign(statements);
    expect(problems).toHaveLength(1);
    return problems[0]!;
  };
  const bits = 'type (b) { bit_width : 2; bit_from : 1; bit_to : 0; } type (w) { bit_width : 3; }';

  it('is reported at the fault', () => {
    expect(problem(cellWith('A & \\\n (B + ! )'))).toBe(
      "syntax-error 5 ')' this is no function: expected a pin name, 0, 1 or (, got )",
    );
  });

  it('with characters beyond ASCII is reported as a whole', () => {
    expect(problem(cellWith('é & ?'))).toBe(
      "syntax-error 4 'é & ?' this is no function: expected a pin name, 0, 1 or (, got ?",
    );
  });

  it('that names no pin is reported at the name', () => {
    expect(problem(cellWith('A & NOPE'))).toBe(
      "name-undeclared 4 'NOPE' NOPE is no pin or state of cell C",
    );
    expect(problem(cellWith('A[1]'))).toBe(
      "name-undeclared 4 'A[1]' A[1] is no pin or state of cell C",
    );
  });

  it('of a single pin must not name a whole bus', () => {
    const text = `${bits} bus (A) { bus_type : b; direction : input; }
      pin (Y) { direction : output; function : "!A"; }`;
    expect(problem(text)).toBe("range-invalid 4 'A' A has 2 bits; name one of them, such as A[1]");
    const bundle = `bundle (A) { members (P, Q); direction : input; }
      pin (Y) { direction : output; function : "!A"; }`;
    expect(problem(bundle)).toBe("range-invalid 4 'A' A has 2 bits; name one of them");
  });

  it('of a bus must not name a narrower one', () => {
    const text = `${bits} bus (A) { bus_type : b; direction : input; }
      bus (Y) { bus_type : w; direction : output; function : "A"; }`;
    expect(problem(text)).toBe(
      "range-invalid 4 'A' A has 2 bits; the one at place 3 from the left is asked for",
    );
  });

  it('of a cell that nothing uses is not looked at', () => {
    const { problems } = readFiles([
      ['t.v', 'module top(input a, output y); BUF b(.A(a), .Y(y)); endmodule'],
      [
        't.lib',
        `library (t) {
          cell (BUF) { pin (A) { } pin (Y) { function : "A"; } }
          cell (UNUSED) { pin (Y) { direction : output; function : "("; three_state : "E"; } }
        }`,
      ],
    ]);
    expect(problems).toEqual([]);
  });
});
