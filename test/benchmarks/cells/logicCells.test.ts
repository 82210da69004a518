import { describe, expect, test } from 'vitest';
import { pinNames } from '../../../benchmarks/circuits/cells/cell.js';
import { logicCells } from '../../../benchmarks/circuits/cells/logicCells.js';
import { poweredEngine } from '../../support/ownCircuits.js';
import { playValues } from '../../support/portValues.js';
import { designWith, models } from './reading.js';

type Values = Readonly<Record<string, boolean>>;

/** The values of inputs in the order of their names. */
const sorted = (values: Values): boolean[] =>
  Object.keys(values)
    .sort()
    .map((pin) => values[pin]!);

const some = (values: readonly boolean[]) => values.some(Boolean);
const all = (values: readonly boolean[]) => values.every(Boolean);
const isOdd = (values: readonly boolean[]) => values.filter(Boolean).length % 2 === 1;
const join = { and: all, or: some, xor: isOdd } as const;

/** Inputs by the letter before their digit: `a0` and `a1` make one group. */
function grouped(values: Values): boolean[][] {
  const groups = new Map<string, boolean[]>();
  for (const [pin, value] of Object.entries(values)) {
    groups.set(pin[0]!, [...(groups.get(pin[0]!) ?? []), value]);
  }
  return [...groups.values()];
}

/** Pins named `x_n` as `x` with the other value. */
const withoutBars = (values: Values): Values =>
  Object.fromEntries(
    Object.entries(values).map(([pin, value]) =>
      pin.endsWith('_n') ? [pin.slice(0, -2), !value] : [pin, value],
    ),
  );

const twoOfThree = (values: Values) => sorted(values).filter(Boolean).length >= 2;

function adder(values: Values, inverted: boolean): Values {
  const sum = sorted(values).filter(Boolean).length;
  const [s, co] = [sum % 2 === 1, sum >= 2];
  return inverted ? { s_n: !s, co_n: !co } : { s, co };
}

function multiplexer(inputs: number, { s, s0, s1, ...data }: Values): boolean {
  const choice = inputs === 2 ? Number(s) : 2 * Number(s1) + Number(s0);
  return sorted(data)[Math.min(choice, inputs - 1)]!;
}

// What the name of a family promises, told apart from the tables that the cells are made from.
const promises: readonly [RegExp, (values: Values, ...parts: string[]) => Values | boolean][] = [
  [/^(?:clock_)?inverter$/, ({ a }) => !a],
  [/^(?:(?:clock_)?buffer|delay_\w+)$/, ({ a }) => a!],
  [/^tie_(low|high)$/, (_, level) => level === 'high'],
  [/^(and|or)\d(?:_bar\d)?$/, (v, gate) => join[gate as 'and'](sorted(withoutBars(v)))],
  [/^n(and|or)\d(?:_bar\d)?$/, (v, gate) => !join[gate as 'and'](sorted(withoutBars(v)))],
  [/^xor\d$/, (v) => isOdd(sorted(v))],
  [/^xnor\d$/, (v) => !isOdd(sorted(v))],
  [/^andnor\d+(?:_bar)?$/, (v) => !some(grouped(withoutBars(v)).map(all))],
  [/^ornand\d+(?:_bar)?$/, (v) => !all(grouped(withoutBars(v)).map(some))],
  [/^andor\d+$/, (v) => some(grouped(v).map(all))],
  [/^orand\d+$/, (v) => all(grouped(v).map(some))],
  [/^majority$/, twoOfThree],
  [/^minority$/, (v) => !twoOfThree(v)],
  [/^mux(\d)$/, (v, inputs) => multiplexer(Number(inputs), v)],
  [/^mux(\d)_invert$/, (v, inputs) => !multiplexer(Number(inputs), v)],
  [/^(?:half|full)_adder$/, (v) => adder(v, false)],
  [/^full_adder_invert$/, (v) => adder(v, true)],
];

function promised(family: string, values: Values): Values {
  for (const [form, value] of promises) {
    const match = form.exec(family);
    if (match === null) continue;
    const result = value(values, ...match.slice(1));
    return typeof result === 'boolean' ? { y: result } : result;
  }
  throw new RangeError(`nothing is known of ${family}`);
}

const mostInputs = 6;

/** All cells beside each other: input k of each on bit k of `x`, every output a port. */
function bench(): string {
  const ports = logicCells.flatMap((cell) =>
    pinNames(cell, 'output').map((pin) => `output ${cell.name}__${pin}`),
  );
  const instances = logicCells.map((cell) => {
    const inputs = pinNames(cell, 'input').map((pin, k) => `.${pin}(x[${k}])`);
    const outputs = pinNames(cell, 'output').map((pin) => `.${pin}(${cell.name}__${pin})`);
    return `${cell.name} \\of/${cell.name} (${[...inputs, ...outputs].join(', ')});`;
  });
  const header = [`input [${mostInputs - 1}:0] x`, ...ports].join(', ');
  return `module bench (${header});\n${instances.join('\n')}\nendmodule`;
}

describe('the cells without state', () => {
  test('have names that say what they compute', () => {
    for (const cell of logicCells) {
      const count = pinNames(cell, 'input').length;
      expect(count).toBeLessThanOrEqual(mostInputs);
      expect(() => rowValues(cell.name, 0)).not.toThrow();
    }
  });

  test.each(models)('compute what their names promise, as %s models', async (model) => {
    const rows = Array.from({ length: 1 << mostInputs }, (_, x) => ({ x }));
    const read = playValues(await poweredEngine(designWith(model, bench()), 'reference'), rows);
    const wrong = logicCells.flatMap(({ name }) =>
      rows.flatMap(({ x }) =>
        Object.entries(rowValues(name, x))
          .filter(([pin, value]) => read(`${name}__${pin}`, x) !== BigInt(value))
          .map(([pin]) => `${name}.${pin} at ${x.toString(2)}`),
      ),
    );
    expect(wrong).toEqual([]);
  });
});

function rowValues(name: string, x: number): Values {
  const cell = logicCells.find((each) => each.name === name)!;
  const entries = pinNames(cell, 'input').map((pin, k) => [pin, ((x >> k) & 1) === 1] as const);
  return promised(cell.family, Object.fromEntries(entries));
}
