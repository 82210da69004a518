import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { designOf } from '../../compiler/compile.js';
import { addConditions } from '../../compiler/condition/conditions.js';
import { Diagnostics, InputError } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { knownValue, shape } from '../read/verilog/behaviour/evaluator.js';
import { operands, type Tree, textOf, tree } from '../read/verilog/behaviour/randomExpression.js';
import { courseOf, enginesOf } from '../support/engines.js';

const circuitOf = (text: string): Circuit =>
  readNetlist([new Source('unit.v', text)], {}, new Diagnostics())!;

/** Values of all operands: binary digits, x among them. */
type Row = Readonly<Record<string, string>>;

const whole = circuitOf(`
  module unit (${operands.map(({ name }) => name).join(', ')}, o);
    ${operands.map(({ name, width, signed }) => `input ${signed ? 'signed' : ''} [${width - 1}:0] ${name};`).join(' ')}
    output o; assign o = a[0];
  endmodule`);

/** Whether conditions hold in each row of values, on every engine: a text of 0, 1 and x for each. */
async function truthOf(
  texts: readonly string[],
  rows: readonly Row[],
  threeValued: boolean,
): Promise<string[]> {
  const { circuit, nets } = addConditions(whole, texts, { threeValued, name: 'condition' });
  const port = { name: 'all', msb: nets.length - 1, lsb: 0, isVector: true };
  const outputs = [{ ...port, nets: Uint32Array.from(nets) }];
  const design = designOf({ ...circuit, outputs }, { threeValued });
  const { inputs, outputs: row } = design.layout;
  const groups = threeValued ? 2 : 1;
  const stimulus = new Uint32Array(rows.length * groups * inputs.words);
  for (const [k, values] of rows.entries()) {
    for (const { name, width, offset } of inputs.ports) {
      for (let i = 0; i < width; i++) {
        const digit = values[name]!.at(-1 - i)!;
        const bit = offset + i;
        const at = k * groups * inputs.words + (digit === 'x' ? inputs.words : 0) + (bit >>> 5);
        if (digit !== '0') stimulus[at]! |= 1 << (bit & 31);
      }
    }
  }
  const { reference, others } = await enginesOf(design);
  const course = courseOf(reference, new Uint8Array(0), stimulus, rows.length);
  for (const [name, engine] of others) {
    const other = courseOf(engine, new Uint8Array(0), stimulus, rows.length);
    expect(other, name).toEqual(course);
  }
  return rows.map((_, k) => {
    const start = k * groups * row.words;
    const bitOf = (i: number, from: number) =>
      (course.response[from + (i >>> 5)]! >>> (i & 31)) & 1;
    return nets
      .map((_net, i) => (threeValued && bitOf(i, start + row.words) ? 'x' : bitOf(i, start)))
      .join('');
  });
}

const digits = (width: number, alphabet: string) =>
  fc
    .array(fc.constantFrom(...alphabet), { minLength: width, maxLength: width })
    .map((list) => list.join(''));

const rowOf = (alphabet: string): fc.Arbitrary<Row> =>
  fc.record(Object.fromEntries(operands.map(({ name, width }) => [name, digits(width, alphabet)])));

const numbersOf = (row: Row) =>
  Object.fromEntries(Object.entries(row).map(([name, text]) => [name, BigInt(`0b${text}`)]));

/** What a tree is worth as a condition; undefined where that is x. */
function holds(t: Tree, row: Row): boolean | undefined {
  const value = knownValue(t, numbersOf(row), shape(t).width);
  return value === undefined ? undefined : value !== 0n;
}

/** Whether a constant select lies outside of its vector, which is refused. */
function isRefused(t: Tree): boolean {
  try {
    addConditions(whole, [textOf(t)], { threeValued: false, name: 'condition' });
    return false;
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    expect(error.message).toContain('[range-invalid]');
    return true;
  }
}

const trees = fc.array(tree, { minLength: 25, maxLength: 25 });

describe('random conditions', () => {
  it('hold where clause 5 says so', async () => {
    let compared = 0;
    const rows = fc.array(rowOf('01'), { minLength: 20, maxLength: 20 });
    await fc.assert(
      fc.asyncProperty(trees, rows, async (all, values) => {
        const some = all.filter((t) => !isRefused(t));
        const truth = await truthOf(some.map(textOf), values, false);
        for (const [k, row] of values.entries()) {
          for (const [i, t] of some.entries()) {
            const expected = holds(t, row);
            if (expected === undefined) continue;
            expect(truth[k]![i], `${textOf(t)} with ${JSON.stringify(row)}`).toBe(
              expected ? '1' : '0',
            );
            compared++;
          }
        }
      }),
      { seed: 31, numRuns: 2 },
    );
    expect(compared).toBeGreaterThan(500);
  });

  it('that are known although values are x hold whatever these are', async () => {
    let known = 0;
    const rows = fc.array(rowOf('0011x'), { minLength: 20, maxLength: 20 });
    await fc.assert(
      fc.asyncProperty(trees, rows, async (all, values) => {
        const some = all.filter((t) => !isRefused(t));
        const truth = await truthOf(some.map(textOf), values, true);
        for (const [k, row] of values.entries()) {
          for (const fill of ['0', '1']) {
            const filled = Object.fromEntries(
              Object.entries(row).map(([name, text]) => [name, text.replaceAll('x', fill)]),
            );
            for (const [i, t] of some.entries()) {
              const expected = holds(t, filled);
              if (truth[k]![i] === 'x' || expected === undefined) continue;
              // Case equality is known where x is compared with x: there the engines must agree.
              if (/[=!]==/.test(textOf(t))) continue;
              expect(truth[k]![i], `${textOf(t)} with ${JSON.stringify(row)}`).toBe(
                expected ? '1' : '0',
              );
              known++;
            }
          }
        }
      }),
      { seed: 32, numRuns: 2 },
    );
    expect(known).toBeGreaterThan(300);
  });
});

describe('a condition over values that are x', () => {
  const row: Row = { a: '1x00', b: '00001', c: 'x', d: '00000000', e: '00000000011' };
  const cases: readonly (readonly [text: string, value: string, clause: string])[] = [
    ['a == 4', '0', '5.1.8: not ambiguous'],
    ['a == 8', 'x', '5.1.8'],
    ['a != 4', '1', '5.1.8'],
    ['a === 8', '0', '5.1.8'],
    ["a === 4'b1x00", '1', '5.1.8'],
    ["a !== 4'b1x00", '0', '5.1.8'],
    ["a === 4'b1z00", '1', 'z counts as x'],
    ["{c, a[3]} === {1'bx, 1'b1}", '1', '5.1.8'],
    ['c === a[2]', '1', '5.1.8'],
    ['a > 2', 'x', '5.1.7: x in an operand'],
    ['!(a <= 2)', 'x', '5.1.7'],
    ['a + 1 != 0', 'x', '5.1.5: x in all bits'],
    ['(a * 0) == 0', 'x', '5.1.5'],
    ['-a != 0', 'x', '5.1.5'],
    ['c || b', '1', '5.1.9'],
    ['c && d', '0', '5.1.9'],
    ['!c', 'x', '5.1.9'],
    ['a', '1', '9.4: known not to be 0'],
    ['&a', '0', '5.1.11'],
    ['^a', 'x', '5.1.11'],
    ['(e << c) == 3', 'x', '5.1.12'],
    ['c ? e : 3', '1', '5.1.13: bits that agree'],
    ['b[c]', 'x', '5.2.1'],
    ['e[a +: 2] === 0', '0', '5.2.1'],
    ["e[a +: 2] === 2'bxx", '1', '5.2.1'],
  ];
  it('is what IEEE 1364-2005 makes of it', async () => {
    const [truth] = await truthOf(
      cases.map(([text]) => text),
      [row],
      true,
    );
    const told = cases.map(([text, , clause], i) => [text, truth![i], clause]);
    expect(told).toEqual(cases);
  });
});

describe('a condition that cannot be', () => {
  const refusals: readonly (readonly [text: string, message: string])[] = [
    ['aa == 1', 'condition:1:1: error: there is no net or memory `aa` [name-undeclared]'],
    ['a == ', 'condition:1:6: error: expected an expression'],
    ['a == 1)', 'condition:1:7: error: expected an operator or the end of the expression'],
    ['a ==\n unit.q', 'condition:2:2: error: there is no net or memory `unit.q`'],
    ['a[4]', 'condition:1:1: error: this select is not all within [3:0]'],
    ['a[4]', 'reads as x and is not written; mend its numbers'],
    ["a == 4'b1x00", 'condition:1:6: error: x and z can only be compared, by === and !=='],
    ["a === (b + 1'bx)", 'condition:1:12: error: x and z can only be compared'],
    ['f(a)', 'condition:1:1: error: `f` cannot be called here'],
    ['a == 1.5', 'condition:1:6: error: a real number has no bits'],
  ];
  it.each(refusals)('is refused at its place: %s', (text, message) => {
    for (const threeValued of [false, true]) {
      const add = () => addConditions(whole, [text], { threeValued, name: 'condition' });
      expect(add).toThrow(message);
    }
  });
});

describe('names in a condition', () => {
  const text = `
    module top (input clk, input [7:0] in, output [7:0] out);
      genvar i;
      generate for (i = 0; i < 2; i = i + 1) begin : lane
        wire [3:0] part = in[4 * i +: 4];
        cell_of u (.d(part[0]));
      end endgenerate
      wire \\flat.name[1] = in[1], \\flat.name[0] = in[0];
      reg signed [0:3] few [-1:1]; reg [8:1] big [2:65];
      integer n;
      always @(posedge clk) begin few[in[0]] <= in; big[in] <= in; n <= -in; end
      assign out = few[0] ^ big[in];
    endmodule
    module cell_of (input d); wire unused = !d; endmodule`;
  const circuit = circuitOf(text);
  const found = (condition: string) => () =>
    addConditions(circuit, [condition], { threeValued: false, name: 'condition' });

  it.each([
    'lane[1].part == 3',
    'top.lane[0].part[2:1] == 3',
    'lane[0].u.unused',
    'flat.name == 2 && flat.name[1]',
    '\\flat.name[1] ',
    'few[-1] < 0 && few[in] == 1 && few[1][0]',
    'big[2] == 5 && big[in][8:7] == 1 && big[65][1]',
    'n < 0',
    'clk',
  ])('are found: %s', (condition) => {
    expect(found(condition)).not.toThrow();
  });

  it('lead to hints where they are misspelt', () => {
    expect(found('lane[0].u.unsed')).toThrow('did you mean lane[0].u.unused?');
    expect(found('flat.nane')).toThrow('`flat.nane`');
    expect(found('few == 1')).toThrow('is an array; select a word of it');
    expect(found('bigg[3]')).toThrow('did you mean big?');
  });
});
