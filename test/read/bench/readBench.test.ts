import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { GateKind, isGate } from '../../../compiler/circuit/gates.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readBench } from '../../../compiler/read/bench/readBench.js';

// s27: F. Brglez, D. Bryan, K. Kozminski, "Combinational profiles of sequential benchmark
// circuits", ISCAS 1989.
const s27 = `
INPUT(G0)
INPUT(G1)
INPUT(G2)
INPUT(G3)
OUTPUT(G17)
G5 = DFF(G10)
G6 = DFF(G11)
G7 = DFF(G13)
G14 = NOT(G0)
G17 = NOT(G11)
G8 = AND(G14, G6)
G15 = OR(G12, G8)
G16 = OR(G3, G8)
G9 = NAND(G16, G15)
G10 = NOR(G14, G11)
G11 = NOR(G5, G9)
G12 = NOR(G1, G7)
G13 = NOR(G2, G12)
`;

function read(text: string): { circuit: Circuit | undefined; problems: string[] } {
  const diagnostics = new Diagnostics();
  const circuit = readBench(new Source('some/where/c.bench', text), diagnostics);
  // Code, the text under the span, and the line it stands in.
  const problems = diagnostics.list.map(({ code, span }) => {
    const at =
      span && `${span.source.slice(span.start, span.end)}@${span.source.place(span.start).line}`;
    return `${code} ${at}`;
  });
  return { circuit, problems };
}

function accepted(text: string): Circuit {
  const { circuit, problems } = read(text);
  expect(problems).toEqual([]);
  return circuit!;
}

const gatesOf = (circuit: Circuit): number => circuit.kind.filter(isGate).length;
const portNames = (ports: Circuit['inputs']): string[] => ports.map((port) => port.name);

/** Kind and fan-in of the net with a name. */
function driver(circuit: Circuit, name: string): { kind: number; fanin: number[] } {
  const net = netOf(circuit, name);
  const fanin = circuit.fanin.slice(circuit.faninStart[net]!, circuit.faninStart[net + 1]!);
  return { kind: circuit.kind[net]!, fanin: [...fanin] };
}

function netOf(circuit: Circuit, name: string): number {
  const signal = [...circuit.hierarchy.modules[0]!.signals].find((each) => each.name === name);
  return circuit.hierarchy.netOf[signal!.offset]!;
}

describe('readBench', () => {
  it('reads s27', () => {
    const circuit = accepted(s27);
    expect(circuit.name).toBe('c');
    expect(portNames(circuit.inputs)).toEqual(['clock', 'G0', 'G1', 'G2', 'G3']);
    expect(portNames(circuit.outputs)).toEqual(['G17']);
    expect(circuit.registers.count).toBe(3);
    expect(gatesOf(circuit)).toBe(10);
    expect(driver(circuit, 'G9')).toEqual({
      kind: GateKind.Nand,
      fanin: [netOf(circuit, 'G16'), netOf(circuit, 'G15')],
    });
  });

  it('clocks every flip-flop from the added port, without power-up value', () => {
    const { registers, inputs, hierarchy } = accepted(s27);
    const clock = inputs[0]!.nets[0]!;
    expect([...registers.clock]).toEqual([clock, clock, clock]);
    expect([...registers.initial]).toEqual([2, 2, 2]);
    const circuit = accepted(s27);
    expect([...registers.output]).toEqual(['G5', 'G6', 'G7'].map((name) => netOf(circuit, name)));
    expect([...hierarchy.scopeNames]).toEqual(['c']);
  });

  it('adds no clock where there is no flip-flop', () => {
    const circuit = accepted('INPUT(a)\nOUTPUT(y)\ny = NOT(a)');
    expect(portNames(circuit.inputs)).toEqual(['a']);
  });

  it('leaves a name clock of the netlist alone', () => {
    const circuit = accepted('INPUT(clock)\nOUTPUT(clock_1)\nclock_1 = DFF(clock)');
    expect(portNames(circuit.inputs)).toEqual(['clock_2', 'clock']);
  });

  it.each([
    ['AND', GateKind.And],
    ['nand', GateKind.Nand],
    ['Or', GateKind.Or],
    ['NOR', GateKind.Nor],
    ['xor', GateKind.Xor],
    ['XNOR', GateKind.Xnor],
  ])('reads %s in any case with any number of inputs', (word, kind) => {
    const circuit = accepted(`INPUT(a)INPUT(b)input(c)output(y)y=${word}(a,b,c,a)`);
    expect(driver(circuit, 'y').kind).toBe(kind);
    expect(driver(circuit, 'y').fanin).toHaveLength(4);
  });

  it.each([
    ['NOT', GateKind.Not],
    ['inv', GateKind.Not],
    ['BUF', GateKind.Buf],
    ['BUFF', GateKind.Buf],
  ])('reads %s with its one input', (word, kind) => {
    expect(driver(accepted(`INPUT(a)\ny = ${word}(a)`), 'y').kind).toBe(kind);
  });

  it.each([
    ['y = vdd', GateKind.One],
    ['y = GND', GateKind.Zero],
    ['y = CONST1()', GateKind.One],
    ['y = const0', GateKind.Zero],
  ])('reads the constant %s', (text, kind) => {
    expect(driver(accepted(text), 'y').kind).toBe(kind);
  });

  it('takes vdd and gnd as constants where nothing defines them', () => {
    const circuit = accepted('y = AND(VDD, gnd)');
    expect(driver(circuit, 'VDD').kind).toBe(GateKind.One);
    expect(driver(circuit, 'gnd').kind).toBe(GateKind.Zero);
    expect(driver(accepted('INPUT(vdd)\ny = NOT(vdd)'), 'vdd').kind).toBe(GateKind.Input);
  });

  it('lets an input be an output too', () => {
    const circuit = accepted('INPUT(a)\nOUTPUT(a)');
    expect(circuit.outputs[0]!.nets).toEqual(circuit.inputs[0]!.nets);
  });

  it('skips comments and takes names of any visible characters', () => {
    const circuit = accepted('# INPUT(z)\r\nINPUT(a[0]) # the first\r\n\\y/* = NOT(a[0])#end');
    expect(portNames(circuit.inputs)).toEqual(['a[0]']);
    expect(driver(circuit, '\\y/*').fanin).toEqual([netOf(circuit, 'a[0]')]);
  });

  it('keeps the place of each definition', () => {
    const circuit = accepted(s27);
    expect(circuit.originOffset[netOf(circuit, 'G12')]).toBe(s27.indexOf('G12 ='));
    expect(circuit.originOffset[netOf(circuit, 'G3')]).toBe(s27.indexOf('G3)'));
  });

  it.each([
    ['an empty text', '', ['syntax-error @1']],
    ['nothing but a comment', '# nothing\n', ['syntax-error @1']],
    ['a text that ends in a gate', 'INPUT(a)\ny = NOT(a\n\n', ['syntax-error @2']],
    ['a name that nothing defines', 'y = NOT(b)', ['name-undeclared b@1']],
    ['an undefined output', 'OUTPUT(\u00e9t)', ['name-undeclared \u00e9t@1']],
    ['a second definition', 'INPUT(a)\na = NOT(a)', ['name-redeclared a@2']],
    ['a second input', 'INPUT(a)\nINPUT(a)', ['name-redeclared a@2']],
    ['a second output', 'INPUT(a)\nOUTPUT(a)\nOUTPUT(a)', ['name-redeclared a@3']],
    ['two inputs of an inverter', 'INPUT(a)\ny = NOT(a, a)', ['gate-arity NOT@2']],
    ['two inputs of a flip-flop', 'INPUT(a)\ny = DFF(a, a)', ['gate-arity DFF@2']],
    ['a gate without inputs', 'y = AND()', ['gate-arity AND@1']],
    ['a constant with an input', 'INPUT(a)\ny = vdd(a)', ['gate-arity vdd@2']],
    ['an unknown kind of gate', 'INPUT(a)\ny = MAJ(a, a, a)', ['syntax-error MAJ@2']],
    ['a missing kind', 'y = (a)', ['syntax-error (@1']],
    ['a missing =', 'INPUT(a)\ny NOT(a)', ['syntax-error NOT@2']],
    ['a missing name of a port', 'INPUT()', ['syntax-error )@1']],
    ['a missing (', 'INPUT a', ['syntax-error a@1']],
    ['a missing comma', 'INPUT(a)\ny = AND(a a)', ['syntax-error a@2']],
    ['a text that ends early', 'INPUT(a)\ny = AND(a,', ['syntax-error @2']],
    ['a statement that begins with =', '= AND(a)', ['syntax-error =@1']],
  ])('reports %s', (_, text, expected) => {
    const { circuit, problems } = read(text);
    expect(problems).toEqual(expected);
    expect(circuit).toBeUndefined();
  });

  it('reads on after an error and reports every one', () => {
    const { problems } = read('INPUT(a\nINPUT(b)\n) (\nx = FOO(b)\ny = NOT(b, b)\nz = NOT(a)');
    expect(problems).toEqual([
      'syntax-error INPUT@2',
      'syntax-error )@3',
      'syntax-error FOO@4',
      'gate-arity NOT@5',
      'name-undeclared a@6',
    ]);
  });

  it('points from a second definition to the first', () => {
    const diagnostics = new Diagnostics();
    readBench(new Source('c.bench', 'INPUT(a)\nx = NOT(a)\nx = BUF(a)'), diagnostics);
    const first = diagnostics.list[0]!.related![0]!.span;
    expect(first.source.place(first.start)).toEqual({ line: 2, column: 1 });
  });

  it('only counts undefined names beyond fifty', () => {
    const { problems } = read(
      Array.from({ length: 60 }, (_, i) => `y${i} = NOT(x${i})`).join('\n'),
    );
    expect(problems).toHaveLength(51);
    expect(problems[50]).toBe('name-undeclared undefined');
  });
});

const published = fileURLToPath(new URL('../../../../shared/circuits/', import.meta.url));
const hasPublished = existsSync(published);
if (!hasPublished) console.log(`published circuits are not at ${published}; not checked`);

// Counts published with the circuits: Brglez, Bryan, Kozminski, ISCAS 1989.
describe.runIf(hasPublished)('published circuits', () => {
  it.each([
    ['s27', 4, 1, 3, 10],
    ['s298', 3, 6, 14, 119],
    ['s344', 9, 11, 15, 160],
    ['s386', 7, 7, 6, 159],
    ['s641', 35, 24, 19, 379],
    ['s1488', 8, 19, 6, 653],
    ['s5378', 35, 49, 179, 2779],
    ['s13207.1', 62, 152, 638, 7951],
    ['s35932', 35, 320, 1728, 16065],
  ])('%s has its published counts', (name, inputs, outputs, registers, gates) => {
    const file = `${published}${name}.bench`;
    const circuit = readBench(new Source(file, readFileSync(file)), new Diagnostics())!;
    expect(circuit.inputs.length - 1).toBe(inputs);
    expect(circuit.outputs.length).toBe(outputs);
    expect(circuit.registers.count).toBe(registers);
    expect(gatesOf(circuit)).toBe(gates);
  });
});
