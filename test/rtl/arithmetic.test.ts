import { describe, it } from 'vitest';
import {
  expectModel,
  type Model,
  randomInputs,
  rtlDesign,
  signed,
  type Values,
} from './circuits.js';

const corners = [0x00, 0x01, 0x7f, 0x80, 0x81, 0xff];
const cornerPairs = corners.flatMap((x) => corners.map((y) => [x, y] as const));

const accumulator = (): Model => {
  let sum = 0;
  let saturated = 0;
  return ({ rst_n, clear, enable, subtract, a_signed, b_signed, a, b }) => {
    if (!rst_n) [sum, saturated] = [0, 0];
    const left = a_signed ? signed(a!, 8) : a!;
    const right = b_signed ? signed(b!, 8) : b!;
    const product = left * right;
    const outputs = { product, product_by_rows: product, sum, saturated };
    if (!rst_n) return outputs;
    if (clear) [sum, saturated] = [0, 0];
    else if (enable) {
      const exact = subtract ? sum - product : sum + product;
      sum = Math.max(-(2 ** 19), Math.min(2 ** 19 - 1, exact));
      if (sum !== exact) saturated = 1;
    }
    return outputs;
  };
};

describe('the multiplier and accumulator', () => {
  it('multiplies with either sign and saturates', async () => {
    const design = rtlDesign(['mac.v']);
    const signs = [0, 1, 2, 3].map((bits) => ({ a_signed: bits & 1, b_signed: bits >> 1 }));
    const quiet = { rst_n: 1, clear: 0, enable: 1, subtract: 0 };
    const directed = signs.flatMap((sign) =>
      cornerPairs.map(([a, b]): Values => ({ ...quiet, ...sign, a, b })),
    );
    // Large products of one sign for a while, so that the sum meets its ends.
    const random = randomInputs(design, 12, 1200, (row, chance, cycle) => ({
      rst_n: cycle === 0 || chance(500) ? 0 : 1,
      clear: chance(200) ? 1 : 0,
      subtract: (cycle >> 6) & 1,
      ...((cycle >> 7) & 1 && { a: row.a! | 0xc0, b: row.b! | 0xc0, a_signed: 0, b_signed: 0 }),
    }));
    await expectModel(design, accumulator, [...random, ...directed]);
  });
});

const shifters =
  (): Model =>
  ({ x, y, by, kind }) => {
    const sx = signed(x!, 8);
    const sy = signed(y!, 8);
    const shifted = [x! << by!, x! >> by!, sx >> by!, (x! << by!) | (x! >> (8 - by!))][kind!]!;
    return {
      shifted,
      staged: shifted,
      lt: x! < y! ? 1 : 0,
      le: x! <= y! ? 1 : 0,
      eq: x === y ? 1 : 0,
      slt: sx < sy ? 1 : 0,
      sge: sx >= sy ? 1 : 0,
      least: Math.min(sx, sy),
      greatest: Math.max(sx, sy),
      distance: Math.abs(sx - sy),
      leading_zeros: Math.clz32(x!) - 24,
      clamped: Math.max(-100, Math.min(100, sx)),
    };
  };

describe('shifters and comparators', () => {
  it('do as arithmetic says', async () => {
    const design = rtlDesign(['shift_compare.v']);
    const directed = cornerPairs.map(
      ([x, y], i): Values => ({ x, y, by: i & 7, kind: (i >> 3) & 3 }),
    );
    const random = randomInputs(design, 13, 1000, ({ x }, chance) => (chance(20) ? { y: x! } : {}));
    await expectModel(design, shifters, [...directed, ...random]);
  });
});
