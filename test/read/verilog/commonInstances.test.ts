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
    fc.constantFrom(
      ...[
        '.p',
        '.q1',
        '.\\r[1] ',
        '.',
        '.input',
        '. p',
        '.p ',
        '.3',
        '.\n p\n',
        '.p1',
        '.p$',
        '.q',
      ],
      ...['.r[1]', '.\\p ', '.\\input ', '.P'],
    ),
    fc.constantFrom('(', ' (', '((', ''),
    net,
    fc.constantFrom(')', ' )', '\n)', '', '))'),
  )
  .map((parts) => parts.join(''));
const wellNamed = fc
  .tuple(fc.constantFrom('.p', '.q1', '.\\r[1] '), net)
  .map(([port, value]) => `${port}(${value})`);
const connections = fc.array(fc.oneof(net, wellNamed, wellNamed, named), { maxLength: 6 });
// An @ marks a gap.
const head = fc.constantFrom(
  ...[
    'inv u@(',
    'inv @u@(',
    'nand (',
    'nand@(',
    'not n@(',
    'inv@\\u/1 (',
    'inv #(2)@u (',
    'inv (@',
  ],
  ...[
    'nand (strong0, strong1)@g@(',
    'inv (strong0, strong1) u (',
    'inv u [1:0]@(',
    'wire@(',
    'inv@',
  ],
  ...['inv u', 'table u (', 'inv 3 (', 'tran@(', 'pullup @p (', 'M @u (', '`M u ('],
);
const tail = fc.constantFrom(
  ...[
    ')@;',
    ')@;',
    ')@;',
    ')@;@',
    ')@,@v@(a,@b)@;',
    ')@,@(a);',
    ')',
    ';',
    ')@;@;',
    '));',
    ');`M @w(a);',
  ],
  ...[');@assign a = b;', ');@wire c,@d;', ')@;@begin@', ');@endgenerate', '@', ').'],
);
const statement = fc.tuple(head, connections, tail);
const instances = fc.array(statement, { minLength: 1, maxLength: 4 });

const declared = fc.constantFrom(
  ...[
    'a',
    'b_2',
    'n$1',
    '\\y ',
    '\\u/x[3] ',
    'c@',
    'd [1:0]',
    'e = a',
    'wire',
    '',
    '3',
    '(* x *) f',
  ],
  ...['`M', '`MISSING', 'g;', 'h i', 'é', '[3:0] j', "1'b0"],
);
const wires = fc.array(declared, { minLength: 1, maxLength: 6 });
const wireStart = fc.constantFrom('wire', 'wire@', 'tri', 'wire [1:0]', 'wire signed', 'wire (a');
const wireEnd = fc.constantFrom('@;', ';', ',;', '', ';@wire z;');

const inGaps = (text: string, gap: string): string => text.replaceAll('@', gap);

// From some instances on the table expects the ports that the last instance of a cell has connected.
const before = [
  ...Array.from({ length: 16 }, () => '  inv first (.p(a), .q1(v[3]), .\\r[1] (c));'),
  '  nand (a, b); M other (.\\input (a), .q1(b));',
];

const wrapped = (lines: readonly string[]): string =>
  `\`define M a\nmodule m;\n${[...before, ...lines].join('\n')}\nendmodule\n`;

type Statement = readonly [string, readonly string[], string];

const textOf = (statements: readonly Statement[], gap: string): string =>
  wrapped(
    statements.map(([start, list, end]) => {
      const inner = list.map((each) => gap + each.replace('(', `(${gap}`));
      return `  ${inGaps(start, gap)}${inner.join(',')}${inGaps(end, gap)}`;
    }),
  );

const wireText = (items: readonly Statement[], gap: string): string =>
  wrapped(
    items.map(([start, names, end]) => {
      const list = names.map((name) => inGaps(name, gap)).join(`,${gap}`);
      return `  ${inGaps(start, gap)} ${list}${inGaps(end, gap)}`;
    }),
  );

/** All that a reading tells: items, where they stand, and problems. */
function told(text: string): unknown {
  const { syntax, problems } = read(text);
  const modules = syntax.modules.map((module) => {
    const { instances: table, items } = module;
    const count = table.connectionStart(table.count);
    return {
      items: showItems(module, syntax),
      instances: Array.from({ length: table.count }, (_, i) => table.position(i)),
      connections: Array.from({ length: count }, (_, c) => table.connectionPosition(c)),
      declared: items.flatMap((item) =>
        item.kind === 'declaration' ? [item.start, item.end, ...placesOf(item.names)] : [],
      ),
    };
  });
  return { modules, problems: problems.map((problem) => problem.replaceAll(comment, blanks)) };
}

const placesOf = (names: Iterable<{ readonly start: number; readonly end: number }>): number[] =>
  [...names].flatMap(({ start, end }) => [start, end]);

describe('instances and wires read without tokens', () => {
  it('are read as the parser reads them, faults included', () => {
    fc.assert(
      fc.property(instances, (parts) => {
        expect(told(textOf(parts, blanks))).toEqual(told(textOf(parts, comment)));
      }),
      { seed, numRuns: Number(process.env.RUNS ?? 600) },
    );
  });

  it('are read so with the wires between them', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(wireStart, wires, wireEnd)), (items) => {
        expect(told(wireText(items, blanks))).toEqual(told(wireText(items, comment)));
      }),
      { seed, numRuns: Number(process.env.RUNS ?? 600) },
    );
  });

  it('need no blanks', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(head, fc.array(wellNamed), tail)), (parts) => {
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
