import fc from 'fast-check';

/** A module with one array, used in all ways that clock edges allow; printed as it is. */
export function randomArrayText(): fc.Arbitrary<string> {
  const shape = fc.record({
    width: fc.integer({ min: 1, max: 9 }),
    isAscending: fc.boolean(),
    // Blocking and non-blocking assignments of one variable do not mix.
    sign: fc.constantFrom('<=', '<=', '='),
    indices: fc.array(
      fc.record({ low: fc.integer({ min: -2, max: 3 }), size: fc.integer({ min: 1, max: 5 }) }),
      { minLength: 1, maxLength: 2 },
    ),
  });
  return shape.chain(({ width, isAscending, sign, indices }) => {
    const range = isAscending ? `[2:${width + 1}]` : `[${width + 1}:2]`;
    const dims = indices.map(({ low, size }) => `[${low}:${low + size - 1}]`).join('');
    const word = wordOf(indices);
    const inside = insideOf(indices);
    const statements = fc.array(statementOf({ word, inside }, { width, isAscending, sign }, 2), {
      minLength: 1,
      maxLength: 5,
    });
    return fc.record({ first: statements, edge: edgeOf, read: word, other: word }).map(
      ({ first, edge, read, other }) => `module any (input clk, input [2:0] a, b,
  input signed [3:0] s, input [8:0] d, input c, e, output [8:0] y, z, output reg [8:0] q, r);
  reg ${range} m ${dims};
  integer i, j;
  initial begin
${filling(indices)}
    q = 0; r = 0;
  end
  always @(posedge clk) begin
    ${first.join('\n    ')}
    q <= ${read};
  end
  always @(${edge} clk) r <= ${other};
  assign y = ${read};
  assign z = ${other};
endmodule
`,
    );
  });
}

interface Index {
  readonly low: number;
  readonly size: number;
}

const edgeOf = fc.constantFrom('posedge', 'negedge');

function filling(indices: readonly Index[]): string {
  const names = ['i', 'j'];
  const loops = indices.map(({ low, size }, n) => {
    const name = names[n]!;
    return `for (${name} = ${low}; ${name} <= ${low + size - 1}; ${name} = ${name} + 1)`;
  });
  const select = indices.map((_, n) => `[${names[n]}]`).join('');
  const sum = indices.map((_, n) => `${names[n]} * ${5 * n + 37}`).join(' + ');
  return `    ${loops.join(' ')} m${select} = ${sum};`;
}

const insideOf = (indices: readonly Index[]): fc.Arbitrary<string> =>
  fc
    .tuple(...indices.map(({ low, size }) => fc.integer({ min: low, max: low + size - 1 })))
    .map((all) => `m${all.map((at) => `[${at}]`).join('')}`);

function wordOf(indices: readonly Index[]): fc.Arbitrary<string> {
  const parts = indices.map(({ low, size }) =>
    fc.oneof(
      fc.constantFrom('a', 'b', 's', 'a + 1', '{c, a}', 'a ^ b', 's + 1'),
      fc.integer({ min: low, max: low + size - 1 }).map(String),
    ),
  );
  return fc.tuple(...parts).map((all) => `m${all.map((part) => `[${part}]`).join('')}`);
}

interface Words {
  readonly word: fc.Arbitrary<string>;
  /** At constant indices that there are. */
  readonly inside: fc.Arbitrary<string>;
}

interface Style {
  readonly width: number;
  readonly isAscending: boolean;
  readonly sign: string;
}

function statementOf(words: Words, style: Style, depth: number): fc.Arbitrary<string> {
  const { width, isAscending, sign } = style;
  const { word, inside } = words;
  const value = fc.oneof(
    fc.constantFrom('d', '~d', 'd + a', '{d[3:0], d[8:4]}', "9'h5a", '0'),
    // What lies outside is x, which two values know in no operation.
    inside.map((other) => `${other} + 1`),
  );
  const bit = fc.integer({ min: 2, max: width + 1 });
  const part = fc.tuple(bit, bit).map(([p, q]) => {
    const [low, high] = [Math.min(p, q), Math.max(p, q)];
    return isAscending ? `[${low}:${high}]` : `[${high}:${low}]`;
  });
  const select = fc.oneof(
    { weight: 4, arbitrary: fc.constant('') },
    { weight: 1, arbitrary: bit.map((at) => `[${at}]`) },
    { weight: 1, arbitrary: fc.constantFrom('[a]', '[a + 2]') },
    { weight: 1, arbitrary: part },
    { weight: 1, arbitrary: fc.constantFrom('[a +: 2]', '[b -: 3]') },
  );
  const plain = fc
    .tuple(word, select, value)
    .map(([target, chosen, what]) => `${target}${chosen} ${sign} ${what};`);
  if (depth === 0) return plain;
  const inner = statementOf(words, style, depth - 1);
  const condition = fc.constantFrom('c', 'e', 'a == b', 's < 0', 'd[0] && c');
  return fc.oneof(
    { weight: 3, arbitrary: plain },
    {
      weight: 2,
      arbitrary: fc.tuple(condition, inner).map(([when, then]) => `if (${when}) ${then}`),
    },
    {
      weight: 2,
      arbitrary: fc
        .tuple(condition, inner, inner)
        .map(
          ([when, then, otherwise]) => `if (${when}) begin ${then} end else begin ${otherwise} end`,
        ),
    },
    {
      weight: 1,
      arbitrary: fc
        .tuple(inner, inner, inner)
        .map(
          ([p, q, rest]) =>
            `case (a[1:0]) 0: begin ${p} end 2: begin ${q} end default: begin ${rest} end endcase`,
        ),
    },
  );
}
