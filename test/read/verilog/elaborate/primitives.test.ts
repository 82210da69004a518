import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { Edge, Priority } from '../../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../../compiler/circuit/clockPorts.js';
import { NO_NET } from '../../../../compiler/circuit/ids.js';
import { circuitOf, evaluate, gatesOf, netsOf, portsOf, reading, signalValue } from './reading.js';

/** A module t with the scalar inputs given, and one instance of the primitive p that drives q. */
function using(primitive: string, inputs: string): string {
  return `${primitive}\nmodule t (output q, input ${inputs}); p (q, ${inputs}); endmodule`;
}

function primitive(inputs: string, rows: string, isSequential = false, extra = ''): string {
  const register = isSequential ? 'reg q;' : '';
  return `primitive p (q, ${inputs}); output q; input ${inputs}; ${register} ${extra}
    table ${rows} endtable endprimitive`;
}

/** The value of a net for values of the inputs a, b, … and of the register or latch. */
function at(circuit: Circuit, net: number, inputs: Record<string, number>, state = 0): number {
  const known = new Map<number, number>();
  for (const { name, nets } of circuit.inputs) known.set(nets[0]!, inputs[name] ?? 0);
  for (const { output } of [circuit.registers, circuit.latches]) {
    for (const each of output) known.set(each, state);
  }
  return evaluate(circuit, net, known);
}

/** The values of a net for all combinations of inputs, the first input the slowest. */
function column(circuit: Circuit, net: number, inputs: string, state = 0): string {
  const names = inputs.split(', ');
  return Array.from({ length: 1 << names.length }, (_, i) => {
    const values = names.map((name, k) => [name, (i >> (names.length - 1 - k)) & 1]);
    return at(circuit, net, Object.fromEntries(values), state);
  }).join('');
}

describe('combinational primitives', () => {
  it('become gates that follow their table', () => {
    const mux = primitive('s, a, b', '0 0 ? : 0; 0 1 ? : 1; 1 ? 0 : 0; 1 ? 1 : 1; x 0 0 : 0;');
    const circuit = circuitOf(using(mux, 's, a, b'));
    expect(gatesOf(circuit)).toEqual(['mux']);
    expect(column(circuit, netsOf(circuit, 'q')[0]!, 's, a, b')).toBe('00110101');
  });

  it.each([
    ['a, b', '0 0 : 0; 1 1 : 0; 0 1 : 1; 1 0 : 1;', '0110', ['xor']],
    ['a, b', '0 ? : 1; ? 0 : 1; 1 1 : 0;', '1110', undefined],
    ['a, b, c', '1 1 ? : 1; 1 ? 1 : 1; ? 1 1 : 1; 0 0 ? : 0;', '00010111', undefined],
    ['a, b, c', '? ? ? : 1;', '11111111', []],
    ['a, b, c', 'b b b : 1;', '11111111', ['or']],
    ['a, b', '1 0 : 1; 0 ? : x;', '0010', undefined],
    ['a', '0 : 1; 1 : 0;', '10', ['not']],
    ['a', '0 : 0; 1 : 1;', '01', ['buf']],
  ])('of %s with rows %s give %s', (inputs, rows, expected, gates) => {
    const circuit = circuitOf(using(primitive(inputs, rows), inputs));
    expect(column(circuit, netsOf(circuit, 'q')[0]!, inputs)).toBe(expected);
    if (gates !== undefined) expect(gatesOf(circuit)).toEqual(gates);
  });

  it('stand in cells and arrays, with a delay, and make no scope', () => {
    const circuit = circuitOf(`${primitive('a, b', '1 1 : 1; 0 ? : 0; ? 0 : 0;')}
      module c4 (input [3:0] a, input b, output [3:0] q); p #2 u [3:0] (q, a, b); endmodule
      module t (input [3:0] a, input b, output [3:0] q); c4 c (a, b, q); endmodule`);
    expect(signalValue(circuit, 'q', { a: 9, b: 1 })).toBe(9);
    expect([...circuit.hierarchy.scopeNames]).toEqual(['t', 'c']);
  });
});

const flipFlop = `
  r 0 : ? : 0;
  r 1 : ? : 1;
  f ? : ? : -;
  ? * : ? : -;`;

// With asynchronous set and reset (active low), and a notifier of timing violations, in the form
// that cell libraries use.
const fullFlipFlop = `
  ? ? 0 ? ? : ? : 0;
  ? ? 1 0 ? : ? : 1;
  p 0 1 ? ? : ? : 0;
  p 1 ? 1 ? : ? : 1;
  n ? ? ? ? : ? : -;
  ? * ? ? ? : ? : -;
  ? ? p ? ? : ? : -;
  ? ? ? p ? : ? : -;
  ? ? ? ? * : ? : x;`;

describe('sequential primitives', () => {
  it('become a register on their rising edge', () => {
    const circuit = circuitOf(using(primitive('c, d', flipFlop, true), 'c, d'));
    const { registers } = circuit;
    expect(registers.count).toBe(1);
    expect(registers.clock[0]).toBe(netsOf(circuit, 'c')[0]);
    expect(registers.data[0]).toBe(netsOf(circuit, 'd')[0]);
    expect(registers.output[0]).toBe(netsOf(circuit, 'q')[0]);
    expect([registers.edge[0], registers.initial[0]]).toEqual([Edge.Rising, 2]);
    expect([registers.set[0], registers.reset[0]]).toEqual([NO_NET, NO_NET]);
  });

  it('become a register on their falling edge, with their power-up value', () => {
    const rows = '(10) 0 : ? : 0; (10) 1 : ? : 1; (0?) ? : ? : -; (x?) ? : ? : -; ? * : ? : -;';
    const text = primitive('c, d', rows, true, "initial q = 1'b1;");
    const { registers } = circuitOf(using(text, 'c, d'));
    expect([registers.edge[0], registers.initial[0]]).toEqual([Edge.Falling, 1]);
  });

  it('become a register with set and reset, and without their notifier', () => {
    const inputs = 'c, d, rn, sn, note';
    const circuit = circuitOf(using(primitive(inputs, fullFlipFlop, true), inputs));
    const { registers } = circuit;
    expect(registers.data[0]).toBe(netsOf(circuit, 'd')[0]);
    const pins = 'rn, sn';
    expect(column(circuit, registers.reset[0]!, pins)).toBe('1100');
    expect(column(circuit, registers.set[0]!, pins)).toBe('0010');
    expect(registers.priority[0]).toBe(Priority.ResetWins);
  });

  it('leave a notifier without driver unmentioned', () => {
    const inputs = 'c, d, rn, sn, note';
    const text = `${primitive(inputs, fullFlipFlop, true)}
      module t (input c, d, rn, sn, output q); reg note; p (q, c, d, rn, sn, note); endmodule`;
    expect(reading(text).problems).toEqual([]);
  });

  it('read enables, scan inputs and their own state in front of the data', () => {
    const rows = `
      r 1 0 : ? : 0; r 1 1 : ? : 1; r 0 ? : ? : -; n ? ? : ? : -; ? * ? : ? : -; ? ? * : ? : -;`;
    const circuit = circuitOf(using(primitive('c, e, d', rows, true), 'c, e, d'));
    const data = circuit.registers.data[0]!;
    expect(column(circuit, data, 'e, d', 0)).toBe('0001');
    expect(column(circuit, data, 'e, d', 1)).toBe('1101');
  });

  it('become a register that toggles', () => {
    const rows = 'r 1 : 0 : 1; r 1 : 1 : 0; r 0 : ? : -; f ? : ? : -; ? * : ? : -;';
    const circuit = circuitOf(using(primitive('c, t', rows, true), 'c, t'));
    expect(column(circuit, circuit.registers.data[0]!, 't', 0)).toBe('01');
    expect(column(circuit, circuit.registers.data[0]!, 't', 1)).toBe('10');
  });

  it('become x where an explicit row says so for set and reset together', () => {
    const rows = `
      ? ? 1 0 : ? : 1; ? ? 0 1 : ? : 0; ? ? 1 1 : ? : x; r 0 0 0 : ? : 0; r 1 0 0 : ? : 1;
      f ? 0 0 : ? : -; ? * 0 0 : ? : -; ? ? n 0 : ? : -; ? ? 0 n : ? : -;`;
    const circuit = circuitOf(using(primitive('c, d, s, r', rows, true), 'c, d, s, r'));
    const { registers } = circuit;
    expect(column(circuit, registers.set[0]!, 's, r')).toBe('0011');
    expect(column(circuit, registers.reset[0]!, 's, r')).toBe('0101');
    expect(registers.priority[0]).toBe(Priority.Unknown);
  });

  it('become a latch with enable and data', () => {
    const rows = '1 0 : ? : 0; 1 1 : ? : 1; 0 ? : ? : -;';
    const circuit = circuitOf(using(primitive('e, d', rows, true), 'e, d'));
    const { latches } = circuit;
    expect(latches.enable[0]).toBe(netsOf(circuit, 'e')[0]);
    expect(latches.data[0]).toBe(netsOf(circuit, 'd')[0]);
    expect([latches.set[0], latches.reset[0]]).toEqual([NO_NET, NO_NET]);
  });

  it('become a latch that is enabled at 0 and reset at 0', () => {
    const rows = '0 0 1 : ? : 0; 0 1 1 : ? : 1; 1 ? 1 : ? : -; ? ? 0 : ? : 0;';
    const circuit = circuitOf(using(primitive('g, d, rn', rows, true), 'g, d, rn'));
    const { latches } = circuit;
    expect(column(circuit, latches.enable[0]!, 'g')).toBe('10');
    expect(latches.data[0]).toBe(netsOf(circuit, 'd')[0]);
    expect(column(circuit, latches.reset[0]!, 'rn')).toBe('10');
  });

  it('become a latch whose rows without change are written with edges', () => {
    const rows = '1 0 : ? : 0; 1 1 : ? : 1; 0 * : ? : -; n ? : ? : -;';
    const { latches } = circuitOf(using(primitive('e, d', rows, true), 'e, d'));
    expect(latches.count).toBe(1);
    expect(latches.enable[0]).not.toBe(NO_NET);
  });

  it('become a latch of set and reset alone', () => {
    const rows = '1 0 : ? : 1; 0 1 : ? : 0; 0 0 : ? : -; 1 1 : ? : 0;';
    const circuit = circuitOf(using(primitive('s, r', rows, true), 's, r'));
    const { latches } = circuit;
    expect([latches.enable[0], latches.data[0]]).toEqual([NO_NET, NO_NET]);
    expect(column(circuit, latches.set[0]!, 's, r')).toBe('0010');
    expect(column(circuit, latches.reset[0]!, 's, r')).toBe('0101');
  });

  it.each([
    [
      'both edges',
      'r 0 : ? : 0; r 1 : ? : 1; f 0 : ? : 0; f 1 : ? : 1; ? * : ? : -;',
      'both edges of c give it a new value. It runs from its table',
    ],
    [
      'two clocks',
      'r 0 : ? : 0; n ? : ? : -; ? r : ? : 1; ? n : ? : -; r 1 : ? : -;',
      'edges of c, d give it a new value. It runs from its table',
    ],
    [
      'no row for a change of the data',
      'r 0 : ? : 0; r 1 : ? : 1; f ? : ? : -;',
      'a change of d alone makes its output change or x. It runs from its table; what',
    ],
    ['a value that swings', '1 ? : 0 : 1; 1 ? : 1 : 0; 0 ? : ? : -;', 'edges of c'],
    ['a value that depends on order', '* 0 : ? : -; ? r : ? : 1; 1 1 : ? : 1; 0 n : ? : -;', ''],
  ])('with %s run from their table', (_, rows, reason) => {
    const { diagnostics, problems } = reading(using(primitive('c, d', rows, true), 'c, d'));
    expect(problems).toEqual(['table-run p@1']);
    expect(diagnostics.list[0]!.message).toContain(reason);
  });

  it('on both edges hang on their clock as registers do', () => {
    const rows = 'r 0 : ? : 0; r 1 : ? : 1; f 0 : ? : 0; f 1 : ? : 1; ? * : ? : -;';
    const circuit = reading(using(primitive('c, d', rows, true), 'c, d')).circuit!;
    expect(circuit.registers.clock[0]).toBe(netsOf(circuit, 'c')[0]);
    expect(circuit.registers.data[0]).toBe(netsOf(circuit, 'd')[0]);
    expect(findClockPorts(circuit).ports).toMatchObject([{ name: 'c', inactive: 0 }]);
  });

  it('with two clocks have both of them found', () => {
    const rows = `r 0 ? ? : ? : 0; r 1 ? ? : ? : 1; ? ? f 0 : ? : 0; ? ? f 1 : ? : 1;
      n ? ? ? : ? : -; ? * ? ? : ? : -; ? ? p ? : ? : -; ? ? ? * : ? : -;`;
    const inputs = 'a, b, c, d';
    const circuit = reading(using(primitive(inputs, rows, true), inputs)).circuit!;
    expect(findClockPorts(circuit).ports).toMatchObject([
      { name: 'a', inactive: 0 },
      { name: 'c', inactive: 1 },
    ]);
  });

  it('whose edges set and clear alone have no clock', () => {
    const rows = '1 0 : ? : 1; f 0 : 1 : -; 0 r : ? : 0; 0 f : 0 : -; 1 1 : ? : 0;';
    const circuit = reading(using(primitive('s, r', rows, true), 's, r')).circuit!;
    expect([circuit.registers.count, circuit.latches.count]).toEqual([0, 1]);
    expect(findClockPorts(circuit).ports).toEqual([]);
  });

  it('of too many inputs are refused', () => {
    const inputs = Array.from({ length: 13 }, (_, i) => `i${i}`).join(', ');
    const row = `${'? '.repeat(13)}: 1;`;
    const { problems } = reading(using(primitive(inputs, row), inputs));
    expect(problems[0]).toBe('not-supported p@1');
  });
});

describe('a latch written by the edges of its inputs', () => {
  it('is a latch all the same, and no clock', () => {
    const circuit = circuitOf(`
      primitive p (q, d, g, r); output q; reg q; input d, g, r; table
        ? ? 1 : ? : 0;  (?0) 1 0 : ? : 0;  (?1) 1 0 : ? : 1;
        0 (?1) 0 : ? : 0;  1 (?1) 0 : ? : 1;  0 1 (?0) : ? : 0;  1 1 (?0) : ? : 1;
        * 0 0 : ? : -;  ? (?0) 0 : ? : -;  ? 0 (?0) : ? : -;
      endtable endprimitive
      module t (input d, g, r, output q); p u (q, d, g, r); endmodule`);
    expect([circuit.latches.count, circuit.registers.count]).toEqual([1, 0]);
    expect(portsOf(circuit.inputs)).toEqual(['d', 'g', 'r']);
  });
});
