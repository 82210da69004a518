import { cellName, inputs, type LogicCell, outputs } from './cell.js';
import { expression, pinsRead } from './expression.js';

/** Family, drives, and per output the function; the output is `y` where there is one. */
type Row = readonly [
  family: string,
  drives: string,
  functions: string | Readonly<Record<string, string>>,
];

const letters = ['a', 'b', 'c', 'd'];

/** `and2` … `nor4`: gates of two to four inputs. */
function plainRows(): Row[] {
  return ['and', 'nand', 'or', 'nor'].flatMap((gate) =>
    [2, 3, 4].map(
      (count): Row => [
        `${gate}${count}`,
        count < 4 ? '1 2' : '1',
        `${gate} ${letters.slice(0, count).join(' ')}`,
      ],
    ),
  );
}

/** The same with the first inputs inverted: `and2_bar1` reads `a_n` and `b`. */
function invertedRows(): Row[] {
  const shapes = [
    ...(['and 2 1', 'or 2 1', 'nand 2 1', 'nor 2 1'] as const),
    ...(['nand 3 1', 'nor 3 1', 'nand 4 2', 'nor 4 2'] as const),
  ];
  return shapes.map((shape): Row => {
    const [gate, count, inverted] = shape.split(' ');
    const operands = letters
      .slice(0, Number(count))
      .map((letter, i) => (i < Number(inverted) ? `(not ${letter}_n)` : letter));
    return [`${gate}${count}_bar${inverted}`, '1', `${gate} ${operands.join(' ')}`];
  });
}

/** `andnor221` is the complement of a0·a1 + b0·b1 + c; one digit for each group. */
function twoLevelRows(inner: 'and' | 'or', outer: string, shapes: string): Row[] {
  return shapes.split(' ').map((shape): Row => {
    const groups = [...shape].map((digit, i) => {
      const letter = letters[i]!;
      if (digit === '1') return letter;
      const pins = Array.from({ length: Number(digit) }, (_, k) => `${letter}${k}`);
      return `(${inner} ${pins.join(' ')})`;
    });
    return [
      `${inner}${outer}${shape}`,
      shape === '21' ? '1 2' : '1',
      `${outer} ${groups.join(' ')}`,
    ];
  });
}

const sum = 'xor a b ci';
const carry = 'or (and a b) (and ci (or a b))';

const rows: readonly Row[] = [
  ['inverter', '1 2 4 8', 'not a'],
  ['buffer', '1 2 4 8', 'buf a'],
  ['clock_inverter', '2 4 8', 'not a'],
  ['clock_buffer', '2 4 8', 'buf a'],
  ['delay_short', '1', 'not (not a)'],
  ['delay_long', '1', 'not (not (not (not a)))'],
  ...plainRows(),
  ...invertedRows(),
  ['xor2', '1 2', 'xor a b'],
  ['xnor2', '1 2', 'xnor a b'],
  ['xor3', '1', 'xor a b c'],
  ['xnor3', '1', 'xnor a b c'],
  ...twoLevelRows('and', 'nor', '21 22 31 32 33 211 221 222 311'),
  ...twoLevelRows('or', 'nand', '21 22 31 32 33 211 221 222 311'),
  ...twoLevelRows('and', 'or', '21 22 222'),
  ...twoLevelRows('or', 'and', '21 22'),
  ['andnor21_bar', '1', 'nor (and a0 a1) (not b_n)'],
  ['ornand21_bar', '1', 'nand (or a0 a1) (not b_n)'],
  ['majority', '1', 'or (and a b) (and c (or a b))'],
  ['minority', '1', 'nor (and a b) (and c (or a b))'],
  ['mux2', '1 2', 'mux s a b'],
  ['mux2_invert', '1', 'not (mux s a b)'],
  ['mux3', '1', 'mux s1 (mux s0 a b) c'],
  ['mux4', '1 2', 'mux s1 (mux s0 a b) (mux s0 c d)'],
  ['mux4_invert', '1', 'not (mux s1 (mux s0 a b) (mux s0 c d))'],
  ['half_adder', '1', { s: 'xor a b', co: 'and a b' }],
  ['full_adder', '1 2', { s: sum, co: carry }],
  ['full_adder_invert', '1', { s_n: `not (${sum})`, co_n: `not (${carry})` }],
  ['tie_low', '1', '0'],
  ['tie_high', '1', '1'],
];

/** Families whose Verilog model is a table of its own. */
const primitives: ReadonlySet<string> = new Set(['majority', 'mux2', 'mux4', 'xnor3']);

/** The cells without state. */
export const logicCells: readonly LogicCell[] = rows.flatMap(([family, drives, given]) => {
  const texts = typeof given === 'string' ? { y: given } : given;
  const functions = Object.entries(texts).map(([pin, text]) => ({ pin, is: expression(text) }));
  const read = [...new Set(functions.flatMap(({ is }) => pinsRead(is)))];
  const pins = [...outputs(...Object.keys(texts)), ...inputs(...read)];
  return drives.split(' ').map((digit): LogicCell => {
    const drive = Number(digit);
    const isPrimitive = primitives.has(family);
    const name = cellName(family, drive);
    return { kind: 'logic', name, family, drive, pins, functions, isPrimitive };
  });
});
