import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { createEngine, engineNames } from '../../compiler/engines.js';
import { anyOf, expectModel, type Model, randomInputs, readingOf, rtlDesign } from './circuits.js';

const coins = [0, 5, 10, 20];
const PATIENCE = 9;

const acceptor = (price: number) => (): Model => {
  let doing: 'collect' | 'vend' | 'pay' = 'collect';
  let money = 0;
  let idle = 0;
  return ({ rst, coin, refund }) => {
    const outputs = {
      accept: doing === 'collect' ? 1 : 0,
      vend: doing === 'vend' ? 1 : 0,
      five: doing === 'pay' ? 1 : 0,
      balance: money / 5,
    };
    const wasIdle = doing === 'collect' && coin === 0 && money > 0;
    if (rst) [doing, money] = ['collect', 0];
    else if (doing === 'collect') {
      money += coins[coin!]!;
      if (money >= price) doing = 'vend';
      else if (money > 0 && (refund || idle === PATIENCE)) doing = 'pay';
    } else {
      money -= doing === 'vend' ? price : 5;
      doing = money === 0 ? 'collect' : 'pay';
    }
    idle = !rst && wasIdle ? (idle + 1) % 16 : 0;
    return outputs;
  };
};

describe('the coin acceptor', () => {
  it('collects, releases and pays back as its model does', async () => {
    const design = rtlDesign(['coin_acceptor.v']);
    const rows = randomInputs(design, 2, 2000, ({ coin }, chance, cycle) => ({
      rst: cycle === 0 || chance(400) ? 1 : 0,
      coin: chance(6) ? coin! : 0,
      refund: chance(40) ? 1 : 0,
    }));
    await expectModel(design, acceptor(35), rows);
  });

  it('has another price by its parameter', async () => {
    const ports = `input clk, rst, refund, input [1:0] coin, output accept, vend, five,
      output [4:0] balance`;
    const design = rtlDesign(['coin_acceptor.v'], anyOf('coin_acceptor', { PRICE: 75 }, ports));
    const rows = randomInputs(design, 3, 800, (_, chance, cycle) => ({
      rst: cycle === 0 ? 1 : 0,
      refund: chance(60) ? 1 : 0,
    }));
    await expectModel(design, acceptor(75), rows);
  });

  it.each(engineNames)(
    'stays in a state that its case leaves out until reset, on %s',
    async (name) => {
      const design = rtlDesign(['coin_acceptor.v']);
      const engine = await createEngine(design, name);
      const state = powerUpState(design.circuit, 'zero');
      design.layout.stateNames.forEach((register, i) => {
        if (/^state\b/.test(register)) state[i] = 1;
      });
      engine.reset(state);
      const rows = Array.from({ length: 30 }, (_, cycle) => ({
        rst: cycle === 20 ? 1 : 0,
        coin: 1,
        refund: cycle % 2,
      }));
      const read = readingOf(engine, rows);
      const accepted = rows.map((_, cycle) => read('accept', cycle));
      expect(accepted.indexOf(1)).toBe(21);
      expect(read('balance', 20)).toBe(0);
      expect(read('balance', 22)).toBe(1);
    },
  );
});
