import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../../../compiler/circuit/builder.js';
import { NameIndex } from '../../../../compiler/read/verilog/elaborate/nameIndex.js';
import { buildTruthTable } from '../../../../compiler/read/verilog/elaborate/truthTable.js';
import { circuitOf, evaluate, signalValue } from './reading.js';

const seed = 20261201;

const functions: Readonly<Record<string, (values: readonly number[]) => number>> = {
  and: (values) => Math.min(...values),
  nand: (values) => 1 - Math.min(...values),
  or: (values) => Math.max(...values),
  nor: (values) => 1 - Math.max(...values),
  xor: (values) => values.reduce((sum, value) => sum ^ value, 0),
  xnor: (values) => 1 - values.reduce((sum, value) => sum ^ value, 0),
};

/** A random gate; its inputs are told as distances back among all nets before it. */
const gate = fc.record({
  word: fc.constantFrom(...Object.keys(functions)),
  inputs: fc.array(fc.nat(30), { minLength: 1, maxLength: 4 }),
  form: fc.constantFrom('gate', 'cell', 'assign', 'array', 'block'),
});

interface Gate {
  readonly word: string;
  readonly inputs: readonly number[];
  readonly form: string;
}

const INPUTS = 5;

/** Net n of the netlist: the inputs come first. */
const netName = (net: number): string => (net < INPUTS ? `i[${net}]` : `n${net - INPUTS}`);

const operators: Readonly<Record<string, readonly [string, string]>> = {
  and: ['', '&'],
  nand: ['~', '&'],
  or: ['', '|'],
  nor: ['~', '|'],
  xor: ['', '^'],
  xnor: ['~', '^'],
};

/** One gate, written in one of several ways that all mean the same. */
function written({ word, form }: Gate, index: number, inputs: readonly number[]): string {
  const output = netName(index + INPUTS);
  const names = inputs.map(netName);
  const [before, between] = operators[word]!;
  switch (form) {
    case 'cell':
      return `cell_${word} #(${inputs.length}) u${index} (.a({${names.join(', ')}}), .y(${output}));`;
    case 'assign':
      return `assign ${output} = ${before}(${names.join(between)});`;
    case 'array':
      return `${word} g${index} [0:0] (${output}, ${names.join(', ')});`;
    case 'block':
      return `generate if (1) begin : b${index} wire w; ${word} (w, ${names.join(', ')});
        assign ${output} = w; end endgenerate`;
    default:
      return `${word} (${output}, ${names.join(', ')});`;
  }
}

function netlist(gates: readonly Gate[]): string {
  const cells = Object.entries(operators).map(
    ([word, [before, between]]) => `module cell_${word} (a, y);
      parameter N = 2; input [N-1:0] a; output y; assign y = ${before}(${between}a);
    endmodule`,
  );
  const body = gates.map((each, index) => written(each, index, sources(each, index)));
  return `${cells.join('\n')}
    module t (input [${INPUTS - 1}:0] i, output y);
      wire ${gates.map((_, index) => netName(index + INPUTS)).join(', ')};
      ${body.join('\n')}
      assign y = ${netName(gates.length + INPUTS - 1)};
    endmodule`;
}

const sources = ({ inputs }: Gate, index: number): number[] =>
  inputs.map((distance) => index + INPUTS - 1 - (distance % (index + INPUTS)));

function expected(gates: readonly Gate[], inputs: number): number {
  const values = Array.from({ length: INPUTS }, (_, bit) => (inputs >> bit) & 1);
  for (const [index, each] of gates.entries()) {
    values.push(functions[each.word]!(sources(each, index).map((source) => values[source]!)));
  }
  return values.at(-1)!;
}

describe('elaborate', () => {
  it('gives a netlist the value of its gates, however they are written', () => {
    fc.assert(
      fc.property(fc.array(gate, { minLength: 1, maxLength: 25 }), (gates) => {
        const circuit = circuitOf(netlist(gates), 't');
        for (let inputs = 0; inputs < 1 << INPUTS; inputs += 3) {
          expect(signalValue(circuit, 'y', { i: inputs })).toBe(expected(gates, inputs));
        }
      }),
      { seed, numRuns: 60 },
    );
  });
});

describe('buildTruthTable', () => {
  it('builds gates that follow the table', () => {
    const tables = fc
      .integer({ min: 0, max: 5 })
      .chain((inputs) =>
        fc.array(fc.boolean(), { minLength: 1 << inputs, maxLength: 1 << inputs }),
      );
    fc.assert(
      fc.property(tables, (column) => {
        const inputs = Math.log2(column.length);
        const builder = new CircuitBuilder();
        const nets = Array.from({ length: inputs }, () => builder.net());
        builder.input('i', nets);
        const table = column.map((value) => (value ? '1' : '0')).join('');
        const output = buildTruthTable(table, nets, builder);
        const circuit = builder.finish('t');
        column.forEach((value, levels) => {
          const known = new Map(nets.map((net, bit) => [net as number, (levels >> bit) & 1]));
          expect(evaluate(circuit, output, known)).toBe(value ? 1 : 0);
        });
      }),
      { seed, numRuns: 200 },
    );
  });
});

describe('NameIndex', () => {
  it('holds what was set last under each name', () => {
    const entries = fc.array(fc.tuple(fc.nat(500), fc.nat()), { maxLength: 400 });
    fc.assert(
      fc.property(entries, (pairs) => {
        const index = new NameIndex();
        for (const [name, value] of pairs) index.set(name, value);
        const model = new Map(pairs);
        const names = Array.from({ length: 501 }, (_, name) => name);
        expect(names.map((name) => index.get(name))).toEqual(
          names.map((name) => model.get(name) ?? -1),
        );
      }),
      { seed, numRuns: 100 },
    );
  });
});
