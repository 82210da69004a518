import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { read, showItems } from './reading.js';

const seed = 20261417;

// A gap of four blanks keeps connections of the usual form on the short way; a comment as long
// takes them off it, while everything else stays at its place.
const blanks = '    ';
const comment = '/**/';

/** What stands between two gaps; most of it is whole, some is broken. */
const net = fc.constantFrom(
  ...['a', 'b_2', 'n$1', '\\u/x[3] ', '\\y ', 'v[3]', 'v [ 3 ]', '\\w[0] [12]', 'v[0003]'],
  ...['v[123456789]', 'v[1234567890]', 'v[4294967295]', 'v[4294967296]', 'v[1_0]', 'v[]', 'v[3'],
  ...['v[3:0]', 'v[i]', 'm[1][2]', 'u.a', 'g[1].a', "1'b0", '{a, b}', 'a & b', '~a', '(a)', 'f(a)'],
  ...['', 'wire', 'a b', '3', '`M', '`MISSING', '\\ ', '"a"', 'a;', 'a)', 'é', '(* x *) a'],
);
const named = fc
  .tuple(
    fc.constantFrom('.p', '.q1', '.\\r[1] ', '.', '.input', '. p', '.p ', '.3', '.\n p\n'),
    fc.constantFrom('(', ' (', '((', ''),
    net,
    fc.constantFrom(')', ' )', '\n)', '', '))'),
  )
  .map((parts) => parts.join(''));
const wellNamed = fc
  .tuple(fc.constantFrom('.p', '.q1', '.\\r[1] '), net)
  .map(([port, value]) => `${port}(${value})`);
const connections = fc.array(fc.oneof(net, wellNamed, wellNamed, named), { maxLength: 6 });
const head = fc.constantFrom('inv u (', 'nand (', 'inv \\u/1 (', 'inv #(2) u (', 'inv u [1:0] (');
const instances = fc.array(fc.tuple(head, connections), { minLength: 1, maxLength: 4 });

const textOf = (parts: readonly (readonly [string, readonly string[]])[], gap: string): string => {
  const lines = parts.map(([start, list]) => {
    const inner = list.map((each) => gap + each.replace('(', `(${gap}`));
    return `  ${start}${inner.join(',')});`;
  });
  return `\`define M a\nmodule m;\n${lines.join('\n')}\nendmodule\n`;
};

/** All that a reading tells: items, where connections stand, and problems. */
function told(text: string): unknown {
  const { syntax, problems } = read(text);
  const modules = syntax.modules.map((module) => {
    const { instances: table } = module;
    const count = table.connectionStart(table.count);
    const places = Array.from({ length: count }, (_, c) => table.connectionPosition(c));
    return { items: showItems(module, syntax), places };
  });
  return { modules, problems: problems.map((problem) => problem.replaceAll(comment, blanks)) };
}

describe('connections read without tokens', () => {
  it('are read as the parser reads them, faults included', () => {
    fc.assert(
      fc.property(instances, (parts) => {
        expect(told(textOf(parts, blanks))).toEqual(told(textOf(parts, comment)));
      }),
      { seed, numRuns: Number(process.env.RUNS ?? 600) },
    );
  });

  it('need no blanks', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(head, fc.array(wellNamed))), (parts) => {
        const shown = (gap: string): string[] => {
          const { syntax } = read(textOf(parts, gap));
          return syntax.modules.flatMap((module) => showItems(module, syntax));
        };
        expect(shown('')).toEqual(shown(comment));
      }),
      { seed, numRuns: 100 },
    );
  });

  it('end with the text', () => {
    const text = 'module m; inv u (.p(a), .q(v[3]), .\\r (\\w ), b, c[2]); endmodule';
    for (let end = text.indexOf('('); end < text.length; end++) {
      const cut = text.slice(0, end);
      const apart = cut.replaceAll('(', `(${comment}`).replaceAll(',', `,${comment}`);
      const messages = (whole: string): string[] =>
        read(whole).problems.map((problem) => problem.replace(/^\S+ \S+ /, ''));
      expect(messages(cut)).toEqual(messages(apart));
    }
  });
});
