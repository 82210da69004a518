import { describe, it } from 'vitest';
import { expectModel, type Model, randomInputs, rtlDesign } from './circuits.js';

const LANES = 4;
const W = 6;
const mask = (1 << W) - 1;

const datapath = (): Model => {
  const state = [0, 0, 0, 0];
  let line = [0, 0, 0];
  return ({ rst_n, x, c, mode }) => {
    const inputs = state.map((_, lane) => (x! >> (lane * W)) & mask);
    const bias = (lane: number) => (lane === 2 ? 13 : 2 * lane + 1);
    if (!rst_n) [state[1], state[2]] = [bias(1), 0];
    const values = inputs.map((a, lane) =>
      lane % 3 === 0 ? (a + c! + bias(lane)) & mask : state[lane]!,
    );
    const odd = values.reduce((bits, value, lane) => bits | ((value & 1) << lane), 0);
    const masked = mode ? odd : 0;
    const outputs = {
      lanes: values.reduce((bits, value, lane) => bits + value * 2 ** (lane * W), 0),
      total: values.reduce((sum, value) => sum + value, 0),
      largest: Math.max(...values),
      odd: odd ^ masked ^ (mode ? 15 : 0),
      masked,
      config_word: ((3 + 7) << 4) | 9,
      delayed: line[2]!,
    };
    line = [inputs[1]! ^ values[0]!, line[0]!, line[1]!];
    if (rst_n) {
      state[1] = inputs[1]! ^ c!;
      if (inputs[2]! > c!) state[2] = (state[2]! + bias(2)) & mask;
    }
    return outputs;
  };
};

describe('a datapath of parameters, generate constructs and arrays', () => {
  it(`has ${LANES} lanes that do as their parameters say`, async () => {
    const design = rtlDesign(['hierarchy.v']);
    const rows = randomInputs(design, 16, 800, (_, chance, cycle) => ({
      rst_n: cycle === 0 || chance(100) ? 0 : 1,
    }));
    await expectModel(design, datapath, rows);
  });
});
