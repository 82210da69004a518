import { describe, expect, it } from 'vitest';
import { NO_NET } from '../../../../compiler/circuit/ids.js';
import { circuitOf, gatesOf, netsOf, reading } from './reading.js';

// Flip-flop, latch and multiplexer with power pins, in the form that cell libraries use: x where
// the supplies are not as they should be, and at every change of them.
const library = `
  primitive flop (q, d, c, vdd, vss, note); output q; reg q; input d, c, vdd, vss, note; table
    0 r 1 0 ? : ? : 0; 1 r 1 0 ? : ? : 1; ? n 1 0 ? : ? : -; * ? 1 0 ? : ? : -;
    ? ? 1 0 * : ? : x; ? ? p 0 ? : ? : x; ? ? 1 n ? : ? : x;
    ? ? 0 ? ? : ? : x; ? ? x ? ? : ? : x; ? ? ? 1 ? : ? : x; ? ? ? x ? : ? : x;
  endtable endprimitive
  primitive latch (q, vdd, d, g); output q; reg q; initial q = 1'b1; input vdd, d, g; table
    1 0 1 : ? : 0; 1 1 1 : ? : 1; 1 ? 0 : ? : -; * ? ? : ? : x; 0 ? ? : ? : x;
  endtable endprimitive
  primitive mux (y, s, a, b, vdd); output y; input s, a, b, vdd; table
    0 0 ? 1 : 0; 0 1 ? 1 : 1; 1 ? 0 1 : 0; 1 ? 1 1 : 1; ? 0 0 1 : 0; ? 1 1 1 : 1; ? ? ? 0 : x;
  endtable endprimitive
  module FLOP (output Q, input D, C, input VDD, VSS);
    reg note; flop (Q, D, C, VDD, VSS, note);
  endmodule
  module LATCH (output Q, input D, G, input VDD, VSS); latch (Q, VDD, D, G); endmodule
  module MUX (output Y, input S, A, B, input VDD, VSS); mux (Y, S, A, B, VDD); endmodule
  module cells (input d, c, g, s, output q, l, y, input vdd, vss);
    FLOP f (q, d, c, vdd, vss); LATCH e (l, d, g, vdd, vss); MUX m (y, s, q, l, vdd, vss);
  endmodule`;

const ports = 'input d, c, g, s, output q, l, y';

describe('primitives whose power pins are tied to supplies', () => {
  it.each([
    ['supply nets', 'supply1 vdd; supply0 vss; cells u (d, c, g, s, q, l, y, vdd, vss);'],
    ['literals', "cells u (d, c, g, s, q, l, y, 1'b1, 1'b0);"],
    [
      'nets with a constant',
      "wire vdd = 1; wire vss; assign vss = 1'b0; cells u (d, c, g, s, q, l, y, vdd, vss);",
    ],
  ])('are recognised as if these were not there, by %s', (_, text) => {
    const circuit = circuitOf(`${library} module t (${ports}); ${text} endmodule`, 't');
    const { registers, latches } = circuit;
    expect([registers.count, latches.count]).toEqual([1, 1]);
    expect(registers.data[0]).toBe(netsOf(circuit, 'd')[0]);
    expect(registers.clock[0]).toBe(netsOf(circuit, 'c')[0]);
    expect([registers.set[0], registers.reset[0]]).toEqual([NO_NET, NO_NET]);
    expect(latches.data[0]).toBe(netsOf(circuit, 'd')[0]);
    expect(latches.enable[0]).toBe(netsOf(circuit, 'g')[0]);
    expect([latches.set[0], latches.reset[0], latches.initial[0]]).toEqual([NO_NET, NO_NET, 1]);
    expect(gatesOf(circuit)).toEqual(['mux']);
  });

  it('run from their tables where a supply is an input, each instance for itself', () => {
    const { circuit, problems } = reading(
      `${library}
      module t (${ports}, output q2, input vdd); supply1 on; supply0 off;
        cells u (d, c, g, s, q, l, y, on, off); FLOP f (q2, d, c, vdd, off);
      endmodule`,
      't',
    );
    expect(problems).toEqual(['table-run flop@2']);
    expect(circuit!.registers.count).toBe(2);
  });

  it('need not fit without the columns that fall away', () => {
    const inputs = Array.from({ length: 14 }, (_, i) => `i${i}`).join(', ');
    const wide = `primitive p (q, ${inputs}); output q; input ${inputs};
      table ${'1 '.repeat(14)}: 1; endtable endprimitive`;
    const nets = Array.from({ length: 12 }, (_, i) => `a[${i}]`).join(', ');
    const using = (ends: string): string =>
      `${wide} module t (input [11:0] a, output q); p (q, ${nets}, ${ends}); endmodule`;
    expect(reading(using("1'b1, 1'b1")).problems).toEqual([]);
    expect(reading(using("1'b1, a[0]")).problems).toEqual(['not-supported p@1']);
  });

  it('follow their table where something else drives the net of a constant as well', () => {
    const { problems } = reading(
      `${library}
      module driver (input a, e, output y); bufif1 (y, a, e); endmodule
      module t (output q, n, input d, c, a, e);
        assign n = 1; driver u (a, e, n); FLOP f (q, d, c, n, 1'b0);
      endmodule`,
      't',
    );
    expect(problems).toEqual(['table-run flop@2']);
  });

  it('keep an input where all of them are tied', () => {
    const circuit = circuitOf(
      `${library}
      module t (output y); MUX m (y, 1'b1, 1'b0, 1'b1, 1'b1, 1'b0); endmodule`,
      't',
    );
    expect(circuit.tables.count).toBe(0);
  });
});
