import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { supplyLevel } from '../../../compiler/circuit/supplyNames.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { RandomBits } from '../../../runtime/random.js';
import { responseTo } from '../../sequential/courses.js';
import { libertyLibrary, netlist, type Power, verilogLibrary } from './library.js';

const libraries = {
  'Verilog with power pins': ['small.v', verilogLibrary, true],
  'Verilog without power pins': ['small.v', verilogLibrary, false],
  'Liberty with power pins': ['small.lib', libertyLibrary(true), false],
  'Liberty without power pins': ['small.lib', libertyLibrary(false), false],
} as const;

function read(kind: Power, library: keyof typeof libraries): [Circuit, string[]] {
  const [path, text, hasSupplies] = libraries[library];
  const diagnostics = new Diagnostics();
  const defines = new Map(hasSupplies ? [['WITH_SUPPLIES', '']] : []);
  const sources = [new Source('chip.v', netlist(kind)), new Source(path, text)];
  const circuit = readNetlist(sources, { defines }, diagnostics);
  return [circuit!, diagnostics.list.map(({ code }) => code)];
}

const random = new RandomBits(31);
const rows = Array.from({ length: 200 }, () =>
  random.next().toString(2).padStart(32, '0').slice(-3),
);

describe('a netlist with power pins', () => {
  it.each(Object.keys(libraries) as (keyof typeof libraries)[])(
    'does what the same one without does, with a library in %s',
    async (library) => {
      for (const threeValued of [false, true]) {
        const [plain] = read('none', 'Verilog without power pins');
        const wanted = await responseTo(plain, rows, { threeValued });
        for (const kind of ['inout', 'declared', 'input', 'inner'] as const) {
          const [circuit, codes] = read(kind, library);
          expect(circuit.inputs.map(({ name }) => name)).toEqual(['a', 'g', 'c', 'r']);
          expect(circuit.outputs.map(({ name }) => name)).toEqual(['y', 'z']);
          // An inner net is a supply to be assumed only where a model reads it.
          const isRead = kind === 'inner' && library === 'Verilog with power pins';
          const isAssumed = kind === 'inout' || isRead;
          const ofPorts = isAssumed ? ['supply-assumed', 'supply-assumed'] : [];
          const ofPins = library.endsWith('without power pins') ? ['supply-absent'] : [];
          expect([...codes].sort()).toEqual([...ofPins, ...ofPorts]);
          expect([circuit.registers.count, circuit.latches.count]).toEqual([2, 1]);
          expect(await responseTo(circuit, rows, { threeValued })).toEqual(wanted);
        }
      }
    },
  );
});

describe('a port of the top', () => {
  const portsOf = (text: string): [string[], string[], string[]] => {
    const diagnostics = new Diagnostics();
    const circuit = readNetlist([new Source('t.v', text)], {}, diagnostics);
    const names = (ports: Circuit['inputs'] = []): string[] => ports.map(({ name }) => name);
    return [
      names(circuit?.inputs),
      names(circuit?.outputs),
      diagnostics.list.map(({ code, message }) => `${code}: ${message}`),
    ];
  };

  it('that a supply inside an instance drives is none', () => {
    const text = `module cell_s (inout p, input a, output y); supply1 p; and (y, a, p); endmodule
      module t (inout p, input a, output y); cell_s u (p, a, y); endmodule`;
    expect(portsOf(text)).toEqual([['a'], ['y'], []]);
  });

  it('with the name of a supply is one where it is an undriven inout alone', () => {
    const text = `module t (inout VDDA, VSS, data, VCC, input GND, input [1:0] VPWR, output y);
      assign VCC = data; assign y = VDDA & VSS & GND & VPWR[0] & VPWR[1]; endmodule`;
    const [inputs, outputs, messages] = portsOf(text);
    expect([inputs, outputs]).toEqual([
      ['data', 'GND', 'VPWR'],
      ['VCC', 'y'],
    ]);
    expect(messages.map((message) => message.split(',')[0])).toEqual([
      'supply-assumed: inout VDDA of the top module is no input but a supply',
      'supply-assumed: inout VSS of the top module is no input but a supply',
      'inout-as-output: inout VCC of the top module is driven inside',
    ]);
  });

  it('need not be there for a net without driver to be a supply', () => {
    const text = `module t (input a, output y, z); wire VDD, GND, VSS; reg VCC; assign VSS = a;
      and (y, VDD, !GND, !VSS); assign z = VCC; endmodule`;
    const [inputs, outputs, messages] = portsOf(text);
    expect([inputs, outputs]).toEqual([['a'], ['y', 'z']]);
    expect(messages.sort()).toEqual([
      'net-undriven: VCC is read but never assigned',
      'supply-assumed: GND has no driver and is taken for a supply, held at 0, as its name says; drive it where it is none',
      'supply-assumed: VDD has no driver and is taken for a supply, held at 1, as its name says; drive it where it is none',
    ]);
  });

  it('has the name of a supply by its first word', () => {
    const high = ['VDD', 'vdd_core', 'VDD1V8', 'AVDD', 'VDDIO', 'vccd1', 'VPWR', 'VPB', 'VNW'];
    const low = ['VSS', 'GND', 'vgnd', 'DVSS', 'vssd1', 'VNB', 'VPW', 'agnd_2'];
    expect(high.map(supplyLevel)).toEqual(high.map(() => 1));
    expect(low.map(supplyLevel)).toEqual(low.map(() => 0));
    for (const name of ['vector', 'p', 'avg', 'd_vdd', 'ground_floor', '']) {
      expect(supplyLevel(name)).toBeUndefined();
    }
  });
});

describe('a connection to a pin that is not there', () => {
  it('is passed over where the pin has the name of a supply, with one note for all', () => {
    const diagnostics = new Diagnostics();
    const text = `module inv (input a, output y); not (y, a); endmodule
      module t (input a, output y); wire m;
        inv u (.a(a), .y(m), .VDD(VDD), .VSS(VSS)); inv v (.a(m), .y(y), .VDD(VDD));
      endmodule`;
    readNetlist([new Source('t.v', text)], {}, diagnostics);
    expect(diagnostics.list.map(({ code }) => code)).toEqual(['supply-absent']);
    const { message, span } = diagnostics.list[0]!;
    expect(message).toContain('the models of inv have no power pins VDD, VSS');
    expect(message).toContain('(3 in all)');
    expect(span!.source.place(span!.start)).toMatchObject({ line: 3 });
  });
});
