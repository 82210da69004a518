import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { circuitOf, netsOf, reading, scopesOf } from './reading.js';

const seed = 20261202;

/** What a declaration may say beside plain names; some of it is wrong. */
const special = fc.constantFrom(
  'a',
  'c',
  'y',
  'f3',
  'f69',
  'm [1:0]',
  'p = ~a',
  '\\e[1] ',
  'z',
  'u',
);
const rest = fc.subarray([
  'input a, c;',
  'output y;',
  'buf (f3, a);',
  'not (f3, c);',
  'and (y, f3, f69, p);',
  'nand n1 (f7, a, \\e[1] );',
  'or (f8, t.f7, f9);',
  'assign m[1] = f8;',
  'assign f10 = f1x;',
  'inv u (f11, f3);',
  'inv z (f12, nosuch);',
  'wire f5;',
  'tri1 f6;',
  'reg f14;',
  'always @(posedge a) f15 <= c;',
]);

// Many names in one declaration stay where they are in the syntax; a few names are copied.
const filler = Array.from({ length: 70 }, (_, i) => `f${i}`);

function textOf(names: readonly string[], items: readonly string[], between: string): string {
  const wires = `wire ${names.join(between)};`;
  const inverter = 'module inv (output y, input a); buf (y, a); endmodule\n';
  return `${inverter}module t (a, c, y);\n${wires}\n${items.join('\n')}\nendmodule\n`;
}

/** The circuit, and what messages say. */
function told(text: string): unknown {
  const { circuit, diagnostics } = reading(text, 't');
  const spanned = diagnostics.list.map(({ code, message, span, related = [] }) => ({
    code,
    message,
    text: span?.source.slice(span.start, span.end),
    related: related.map((each) => each.span.source.slice(each.span.start, each.span.end)),
  }));
  if (circuit === undefined) return spanned;
  const { kind, fanin, faninStart, inputs, outputs, hierarchy } = circuit;
  const signals = hierarchy.modules.map((module) => [...module.signals]);
  return { spanned, kind, fanin, faninStart, inputs, outputs, signals, netOf: hierarchy.netOf };
}

describe('plain wires', () => {
  it('are the same whether many or few are declared together', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(special, fc.nat(70)), { maxLength: 5 }),
        rest,
        (specials, items) => {
          const names = filler.slice();
          for (const [name, place] of specials) names.splice(place, 0, name);
          const apart = textOf(names, items, '; localparam S = 0; wire ').replace(
            / S /g,
            (_, at) => {
              return ` S${at} `;
            },
          );
          expect(told(textOf(names, items, ', '))).toEqual(told(apart));
        },
      ),
      { seed, numRuns: Number(process.env.RUNS ?? 150) },
    );
  });
});

describe('instances of a large netlist', () => {
  const count = 10_000;
  const large = (more: string): string => {
    const wires = Array.from({ length: count }, (_, i) => `n${i}`);
    const cells = wires.map((net, i) => `inv u${i} (${net}, a);`);
    return (
      'module inv (output y, input a); parameter [0:0] P = 0; wire w; buf (w, a); ' +
      'xor (y, w, P); endmodule\n' +
      `module t (input a, output y);\nwire ${wires.join(', ')};\n${cells.join('\n')}\n` +
      `not g (q, a);\n${more}\nendmodule\n`
    );
  };

  it('have names that lead into them', () => {
    const circuit = circuitOf(large('buf (y, u7.w); defparam u9999.P = 1;'));
    expect(netsOf(circuit, 'y')).not.toEqual(netsOf(circuit, 'u7.w'));
    expect(scopesOf(circuit)).toHaveLength(count);
    const [inverted] = netsOf(circuit, 'u9999.y');
    const [plain] = netsOf(circuit, 'u9998.y');
    expect(circuit.faninStart[inverted! + 1]! - circuit.faninStart[inverted!]!).toBeGreaterThan(0);
    expect(plain).not.toBe(inverted);
  });

  it('have each a name of its own', () => {
    const { problems, diagnostics } = reading(
      large('inv u4711 (r, a); buf u12 (s, a); wire u13;'),
      't',
    );
    expect(problems).toEqual([
      'name-redeclared u13@10005',
      'name-redeclared u4711@10005',
      'name-redeclared u12@10005',
    ]);
    const firsts = diagnostics.list.map(({ related }) => related![0]!.span);
    expect(firsts.map(({ source, start }) => source.place(start).line)).toEqual([17, 4715, 16]);
  });

  it('are told as what a name might be meant to be', () => {
    const cells = Array.from({ length: count }, (_, i) => `inv u${i} (.a(a));`).join('\n');
    const text = `module inv (output y, input a); not (y, a); endmodule
      module t (input a, output y);\n${cells}\ninv the_counter (r, a); assign y = the_conter;
      endmodule`;
    expect(reading(text, 't').diagnostics.list.map(({ message }) => message)).toEqual([
      '`the_conter` is not declared here; declare it or mend its spelling; did you mean the_counter?',
    ]);
  });
});
