import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../../../compiler/circuit/builder.js';
import type { NetId } from '../../../../compiler/circuit/ids.js';
import { Logic } from '../../../../compiler/read/verilog/behaviour/logic.js';
import { Simulation } from './simulation.js';

type Operation = 'and' | 'or' | 'xor' | 'mux';

// IEEE 1364-2005, tables 5-8 to 5-10 (clause 5.1.10), and the merging of clause 5.1.13.
const tables: Readonly<Record<Operation, (a: string, b: string, c: string) => string>> = {
  and: (a, b, c) => (`${a}${b}${c}`.includes('0') ? '0' : `${a}${b}${c}` === '111' ? '1' : 'x'),
  or: (a, b, c) => (`${a}${b}${c}`.includes('1') ? '1' : `${a}${b}${c}` === '000' ? '0' : 'x'),
  xor: (a, b, c) =>
    `${a}${b}${c}`.includes('x') ? 'x' : String((Number(a) + Number(b) + Number(c)) % 2),
  mux: (a, b, c) => (a === '0' ? b : a === '1' ? c : b === c ? b : 'x'),
};

const values = ['0', '1', 'x'];
const sources = ['0', '1', 'x', 'p', 'q', 'r'];

const triples = (list: readonly string[]): [string, string, string][] =>
  list.flatMap((a) => list.flatMap((b) => list.map((c): [string, string, string] => [a, b, c])));

describe('folded gates', () => {
  it.each(Object.keys(tables) as Operation[])(
    'keep the three-valued meaning of %s',
    (operation) => {
      const builder = new CircuitBuilder();
      const logic = new Logic(builder);
      const nets = new Map<string, NetId>([
        ['0', logic.zero],
        ['1', logic.one],
        ['x', logic.unknown],
      ]);
      for (const name of ['p', 'q', 'r']) {
        const net = builder.net();
        builder.input(name, [net]);
        nets.set(name, net);
      }
      const built = triples(sources).map((inputs) => {
        const [a, b, c] = inputs.map((name) => nets.get(name)!) as [NetId, NetId, NetId];
        return {
          inputs,
          plain: logic[operation](a, b, c),
          inverse: logic.not(logic[operation](a, b, c)),
        };
      });
      built.forEach(({ plain, inverse }, i) => {
        nets.set(`plain${i}`, plain);
        nets.set(`inverse${i}`, inverse);
      });
      const simulation = new Simulation(builder.finish('test'), (name) => [nets.get(name)!]);
      for (const [p, q, r] of triples(values)) {
        const given: Readonly<Record<string, string>> = { p, q, r };
        simulation.set(given);
        built.forEach(({ inputs }, i) => {
          const [a, b, c] = inputs.map((name) => given[name] ?? name) as [string, string, string];
          const value = tables[operation](a, b, c);
          expect([...inputs, simulation.bits(`plain${i}`)]).toEqual([...inputs, value]);
          const inverse = value === 'x' ? 'x' : value === '1' ? '0' : '1';
          expect([...inputs, simulation.bits(`inverse${i}`)]).toEqual([...inputs, inverse]);
        });
      }
    },
  );

  it('are made once, and constants and repetitions make none', () => {
    const builder = new CircuitBuilder();
    const logic = new Logic(builder);
    const [a, b] = [builder.net(), builder.net()];
    expect(logic.and(a, b)).toBe(logic.and(b, a, a));
    expect(logic.not(logic.not(a))).toBe(a);
    expect(logic.or(a, logic.zero)).toBe(a);
    expect(logic.mux(b, a, a)).toBe(a);
    expect(logic.xor(a, a)).not.toBe(logic.zero);
  });
});
