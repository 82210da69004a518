import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { cellNamed } from '../../../benchmarks/circuits/cells/library.js';
import { mapped } from '../../../benchmarks/circuits/cells/mapping/mapped.js';
import { circuits } from '../../../benchmarks/circuits/index.js';
import { Module } from '../../../benchmarks/circuits/netlistWriter.js';
import { type Bit, type Definition, one, zero } from '../../../benchmarks/circuits/nets.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import type { Design } from '../../../compiler/compile.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { rowStride } from '../../../runtime/layout.js';
import { RandomBits } from '../../../runtime/random.js';
import { designFrom, poweredEngine } from '../../support/ownCircuits.js';
import { responseOf } from '../../support/responses.js';
import { designWith, type Model, models } from './reading.js';

const textOf = (definition: Definition): string => [...verilog(definition)].join('');

const ofGates = (circuit: Definition): Design => designFrom(new Source('gates.v', textOf(circuit)));

/** The response to random inputs, of which a quarter is 1. */
async function response(design: Design, cycles: number): Promise<Uint32Array> {
  const { inputs } = design.layout;
  const stride = rowStride(inputs, false);
  const random = new RandomBits(1364);
  const rows = Uint32Array.from({ length: cycles * stride }, () => random.next() & random.next());
  const inLastWord = inputs.bits - 32 * (inputs.words - 1);
  const mask = 0xffffffff >>> (32 - inLastWord);
  for (let cycle = 1; cycle <= cycles; cycle++) rows[cycle * stride - 1]! &= mask;
  return responseOf(await poweredEngine(design, 'bytecode'), cycles, rows);
}

/** The cells of a netlist with their names and pins, read line by line. */
function cellsOf(netlist: string) {
  return netlist.split('\n').flatMap((line) => {
    const [, cell, name, pins] = /(hob\d_\w+) (\S+) +\((.*)\);$/.exec(line) ?? [];
    if (cell === undefined) return [];
    const connections = [...pins!.matchAll(/\.(\w+)\(([^)]*)\)/g)];
    return [{ cell, name: name!, pins: new Map(connections.map(([, pin, net]) => [pin!, net!])) }];
  });
}

const made = new Map<string, Definition>();

/** A circuit made of cells; made once for all tests. */
function cellsFor(name: string, circuit: Definition, hasClockTree: boolean): Definition {
  const key = `${name} ${hasClockTree}`;
  const known = made.get(key) ?? mapped(circuit, { hasClockTree });
  made.set(key, known);
  return known;
}

const mappable = circuits.map((circuit) => [circuit.name, circuit.build()] as const);
const long = (name: string) => (name === 'sha256' || name === 'aes128' ? 60 : 1000);

describe('a circuit made of cells', () => {
  // Each circuit with another model of the library, so that each model sees all kinds of cells.
  test.each(mappable)('responds as its gates do: %s', async (name, circuit) => {
    const cycles = long(name);
    const expected = await response(ofGates(circuit), cycles);
    for (const [i, hasClockTree] of [false, true].entries()) {
      const model = models[(name.length + i) % models.length]!;
      const netlist = textOf(cellsFor(name, circuit, hasClockTree));
      expect(await response(designWith(model, netlist), cycles)).toEqual(expected);
    }
  });

  test.each(['timing', 'functional'] as const)(
    'responds as without power pins where it has them, with %s models',
    async (model: Model) => {
      const circuit = circuits.find(({ name }) => name === 'uart')!.build();
      const expected = await response(designWith(model, textOf(mapped(circuit))), 500);
      const powered = textOf(mapped(circuit, { hasPowerPins: true }));
      expect(powered).toContain('.vdd(vdd), .vss(vss)');
      const design = designWith(model, powered, { hasPower: true });
      expect(await response(design, 500)).toEqual(expected);
    },
  );

  test.each(mappable)('connects pins that its cells have, outputs once: %s', (name, circuit) => {
    for (const hasClockTree of [false, true]) {
      const placed = cellsOf(textOf(cellsFor(name, circuit, hasClockTree)));
      expect(new Set(placed.map(({ name }) => name)).size).toBe(placed.length);
      const driven = new Set<string>();
      const faults: string[] = [];
      for (const { cell, name: own, pins } of placed) {
        const known = cellNamed(cell).pins;
        for (const [pin, net] of pins) {
          const direction = known.find((each) => each.name === pin)?.direction;
          const isRight = direction === 'output' ? !driven.has(net) : net !== '';
          if (direction === undefined || !isRight) faults.push(`${own}.${pin}: ${net}`);
          if (direction === 'output' && net !== '') driven.add(net);
        }
      }
      expect(faults).toEqual([]);
    }
  });

  test('counts its flip-flops, and needs fewer cells than it had gates', () => {
    for (const [name, circuit] of mappable) {
      if (name === 'prbs') continue;
      const { gates, registers } = circuit.size();
      for (const hasClockTree of [false, true]) {
        const size = cellsFor(name, circuit, hasClockTree).size();
        expect(size.registers).toBe(registers);
        expect(size.gates).toBeLessThanOrEqual(gates + (hasClockTree ? 1 : 0));
      }
    }
  });

  test('hangs no net of a clock on more than 8 pins where it has a tree', () => {
    const aes = circuits.find(({ name }) => name === 'aes128')!.build({ cores: 2 });
    const readers = new Map<string, number>();
    for (const { cell, pins } of cellsOf(textOf(mapped(aes, { hasClockTree: true })))) {
      const clock = cell.includes('clock_') ? pins.get('a') : pins.get('ck');
      if (clock !== undefined) readers.set(clock, (readers.get(clock) ?? 0) + 1);
    }
    expect(Math.max(...readers.values())).toBeLessThanOrEqual(8);
    expect([...readers.keys()].filter((net) => net.startsWith('clock_')).length).toBeGreaterThan(
      30,
    );
  });

  test('names what was in a hierarchy by escaped paths', () => {
    const aes = circuits.find(({ name }) => name === 'aes128')!.build();
    const netlist = textOf(mapped(aes));
    const parts = [
      '\\core_0/ff_ciphertext_127 (',
      '.q(ciphertext[127])',
      '(\\core_0/round_key[5] )',
    ];
    for (const part of parts) expect(netlist.includes(part)).toBe(true);
  });

  test('drives outputs that are constants, inputs or each other', async () => {
    const m = new Module('wires');
    const a = m.inputs('a', 2);
    m.output('straight', a);
    m.output('constants', [zero, one]);
    const both = m.and(...a);
    m.output('both', both);
    m.output('again', [both, both]);
    for (const model of models) {
      const found = await response(designWith(model, textOf(mapped(m))), 40);
      expect(found).toEqual(await response(ofGates(m), 40));
    }
  });

  test('computes what any gates compute', async () => {
    const kinds = ['and', 'nand', 'or', 'nor', 'xor', 'xnor', 'not', 'buf'] as const;
    const gate = fc.record({
      kind: fc.constantFrom(...kinds),
      // Mostly what came just before, so that trees grow.
      inputs: fc.array(fc.oneof(fc.nat(3), fc.nat(3), fc.nat(40)), { minLength: 2, maxLength: 4 }),
    });
    const gates = fc.array(gate, { minLength: 1, maxLength: 40 });
    await fc.assert(
      fc.asyncProperty(gates, fc.nat(6), async (rows, shown) => {
        const m = new Module('logic');
        const bits: Bit[] = [...m.inputs('x', 5)];
        for (const { kind, inputs } of rows) {
          const count = kind === 'not' || kind === 'buf' ? 1 : inputs.length;
          const read = inputs.slice(0, count).map((back) => bits.at(-1 - (back % bits.length))!);
          bits.push(m.gate(kind, read));
        }
        m.output('y', [bits.at(-1)!, ...bits.filter((_, i) => i % 7 === shown)]);
        const found = await response(designWith('functional', textOf(mapped(m))), 100);
        expect(found).toEqual(await response(ofGates(m), 100));
      }),
      { seed: 21, numRuns: 40 },
    );
  });
});
