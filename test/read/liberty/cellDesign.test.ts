import { describe, expect, it } from 'vitest';
import { bitName } from '../../../compiler/circuit/hierarchy.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { play, referenceFor } from '../../support/rows.js';
import { gatesOf, netsOf, scopesOf, signalValue } from '../verilog/elaborate/reading.js';
import { cellDesign, type DesignReading, readFiles } from './reading.js';

const library = (cells: string): string => `library (t) {\n${cells}\n}`;
const inv = `cell (INV) { pin (A) { direction : input; } pin (Y) { direction : output; function : "!A"; } }`;
const buf = `cell (INV) { pin (A) { direction : input; } pin (Y) { direction : output; function : "A"; } }`;
const top = 'module top(input a, output y); INV i(.A(a), .Y(y)); endmodule';
const model = 'module INV(input A, output Y); not (Y, A); endmodule';
const cure = 'give the cell a Verilog model in a file that is named before the library';

function circuitOf({ circuit, problems }: DesignReading) {
  expect(problems).toEqual([]);
  return circuit!;
}

describe('a Liberty cell in a Verilog netlist', () => {
  const flop = `cell (DFF) { pin (D, CK) { direction : input; }
    pg_pin (VDD) { pg_type : primary_power; } ff (IQ, IQN) { clocked_on : "CK"; next_state : "D"; }
    pin (Q) { direction : output; function : "IQ"; } pin (QN) { direction : output; function : "IQN"; } }\n`;

  it('is an instance like that of a Verilog module', () => {
    const netlist = `module top(input ck, output [1:0] q);
      wire n, k;
      DFF f0(.CK(ck), .D(n), .Q(q[0]), .QN(n)), f1(.CK(ck), .D(k), .Q(q[1]));
      INV g(.A(q[1]), .Y(k));
    endmodule`;
    const cells = `module DFF(input D, CK, output reg Q, output QN);
      always @(posedge CK) Q <= D;
      not (QN, Q);
    endmodule
`;
    const liberty = circuitOf(
      readFiles([
        ['t.v', netlist],
        ['t.lib', library(flop + inv)],
      ]),
    );
    const verilog = circuitOf(
      readFiles([
        ['t.v', netlist],
        ['c.v', cells + model],
      ]),
    );
    expect(scopesOf(liberty)).toEqual(['f0', 'f1', 'g']);
    expect(liberty.netCount).toBe(verilog.netCount);
    expect(gatesOf(liberty)).toEqual(['not', 'not', 'not']);
    expect(gatesOf(verilog)).toEqual(['not', 'not', 'not']);
    const rows = ['', '', '', ''];
    const response = ['00', '11', '00', '11'];
    expect(play(referenceFor(liberty), rows)).toEqual(response);
    expect(play(referenceFor(verilog), rows)).toEqual(response);
  });

  it('has its pins and states as names, and its logic comes from the place of the instance', () => {
    const netlist = 'module top(input c, d, output q);\n  DFF f(.CK(c), .D(d), .Q(q)); endmodule';
    const circuit = circuitOf(
      readFiles([
        ['t.v', netlist],
        ['t.lib', library(flop)],
      ]),
    );
    const { hierarchy } = circuit;
    const signals = [...hierarchy.modules[hierarchy.scopeModule[1]!]!.signals];
    const names = signals.map((signal) => bitName(hierarchy, 1, signal, 0));
    expect(names).toEqual(['f.D', 'f.CK', 'f.Q', 'f.QN', 'f.IQ']);
    const [state] = netsOf(circuit, 'f.IQ');
    expect(netsOf(circuit, 'q')).toEqual([state]);
    const source = circuit.sources[circuit.originSource[state!]!]!;
    expect(source.path).toBe('t.v');
    expect(source.place(circuit.originOffset[state!]!).line).toBe(2);
  });

  it('has names for the paths of the netlist', () => {
    const netlist = `module top(input c, d, output q, s);
      DFF f(.CK(c), .D(d), .Q(q)); assign s = f.IQ ^ f.D; endmodule`;
    const circuit = circuitOf(
      readFiles([
        ['t.v', netlist],
        ['t.lib', library(flop)],
      ]),
    );
    expect(play(referenceFor(circuit), ['1', '1', '0'])).toEqual(['0 1', '1 0', '1 1']);
  });

  it('may stand in arrays, and its buses take vectors', () => {
    const cells =
      library(`${inv} type (b) { bit_width : 2; downto : true; bit_from : 1; bit_to : 0; }
      cell (REV) { bus (A) { bus_type : b; direction : input; }
        bus (Y) { bus_type : b; direction : output; function : "!A"; } }`);
    const netlist = `module top(input [3:0] a, output [3:0] y, z);
      INV i[3:0](.A(a), .Y(y)); REV r(.A({a[0], a[1]}), .Y(z[1:0])), s(.A(a[3:2]), .Y({z[2], z[3]}));
      endmodule`;
    const circuit = circuitOf(
      readFiles([
        ['t.lib', cells],
        ['t.v', netlist],
      ]),
    );
    expect(signalValue(circuit, 'y', { a: 0b1010 })).toBe(0b0101);
    expect(signalValue(circuit, 'z', { a: 0b1001 })).toBe(0b1001);
  });

  it('leaves unconnected outputs and supply pins alone, and warns of open inputs', () => {
    const netlist = 'module top(input c, output q); DFF f(.CK(c), .Q(q)); endmodule';
    const { problems } = readFiles([
      ['t.v', netlist],
      ['t.lib', library(flop)],
    ]);
    expect(problems).toEqual(["net-undriven t.v:1 'DFF' input D of f is not connected"]);
  });

  it('takes supplies at its supply pins', () => {
    const netlist = `module top(input c, d, inout vdd, output q);
      supply1 v; DFF f(.CK(c), .D(d), .Q(q), .VDD(v)), g(.CK(c), .D(d), .VDD(vdd)); endmodule`;
    circuitOf(
      readFiles([
        ['t.v', netlist.replace('inout vdd, ', 'input vdd, ')],
        ['t.lib', library(flop)],
      ]),
    );
  });

  it('takes no connections by position', () => {
    const netlist = 'module top(input a, output y); INV i(a, y); endmodule';
    const { problems } = readFiles([
      ['t.v', netlist],
      ['t.lib', library(inv)],
    ]);
    expect(problems).toEqual([
      "not-supported t.v:1 'a' the library of INV gives its pins no order; connect them by name, as .A(…)",
    ]);
  });

  it('has only the pins of its library', () => {
    const netlist = 'module top(input a, output y); INV i(.A(a), .Y(y), .Z(a)); endmodule';
    const { problems } = readFiles([
      ['t.v', netlist],
      ['t.lib', library(inv)],
    ]);
    expect(problems).toEqual(["port-unknown t.v:1 'Z' INV has no port Z; it has A, Y"]);
  });

  it('may have no outputs', () => {
    const cells = library(
      'cell (FILL) { area : 1; } cell (ANT) { pin (A) { direction : input; } }',
    );
    const netlist =
      'module top(input a, output y); FILL f(); ANT n(.A(a)); assign y = a; endmodule';
    expect(
      gatesOf(
        circuitOf(
          readFiles([
            ['t.v', netlist],
            ['t.lib', cells],
          ]),
        ),
      ),
    ).toEqual(['buf']);
  });

  it('is no top module', () => {
    const { problems } = readFiles([['t.lib', library(inv)]]);
    expect(problems).toEqual(["top-unknown 1 '' the files define no module; name a file with one"]);
  });
});

describe('a cell that cannot be built', () => {
  it.each([
    [
      'pin (Y) { direction : output; }',
      `not-supported 4 'pin (Y)' the library gives no logic for pin Y of cell C; ${cure}`,
    ],
    [
      'pin (P, Q) { direction : output; } pin (R, S) { direction : output; } pin (T) { direction : output; }',
      `not-supported 4 'pin (P, Q)' the library gives no logic for the pins P, Q, R, S, … of cell C; ${cure}`,
    ],
    [
      'pin (Y) { direction : output; internal_node : "N"; }',
      `not-supported 4 'pin (Y)' the library gives no logic for pin Y of cell C; ${cure}`,
    ],
    [
      'pin (N) { direction : internal; } pin (Y) { direction : output; function : "N"; }',
      `not-supported 4 'pin (N)' the library gives no logic for pin N of cell C; ${cure}`,
    ],
    [
      'clock_gating_integrated_cell : "latch_posedge"; pin (GCK) { direction : output; }',
      "not-supported 4 'latch_posedge' cell C is a clock gate of the kind latch_posedge, " +
        `but the library gives no logic for GCK; ${cure}`,
    ],
    [
      'pin (A) { direction : output; function : "E"; }',
      "name-redeclared 4 'pin (A)' pin A is described twice; remove one of the two",
    ],
  ])('is refused where it is used: %s', (text, problem) => {
    const { problems, diagnostics } = cellDesign(`pin (A, E) { direction : input; }\n${text}`);
    expect(problems).toEqual([problem]);
    const [related] = diagnostics.list[0]!.related!;
    expect(related!.message).toBe('cell C is used here');
    expect(related!.span.source.path).toBe('t.v');
    expect(related!.span.source.slice(related!.span.start, related!.span.end)).toBe('C');
  });

  it('may have an internal pin without logic that no function names', () => {
    expect(
      cellDesign('pin (N) { direction : internal; } pin (A) { direction : input; }').problems,
    ).toEqual([]);
  });

  it('is of no account while nothing uses it', () => {
    const cells = library(`${inv} cell (MACRO) { pin (Y) { direction : output; } }`);
    expect(
      readFiles([
        ['t.v', top],
        ['t.lib', cells],
      ]).problems,
    ).toEqual([]);
  });
});

describe('a cell with several models', () => {
  const isInverter = ({ circuit }: DesignReading): boolean =>
    signalValue(circuit!, 'y', { a: 1 }) === 0;
  const other = 'module INV(input A, output Y); buf (Y, A); endmodule';

  it('has that of the Verilog file named before the library', () => {
    const reading = readFiles([
      ['t.v', top],
      ['c.v', model],
      ['t.lib', library(buf)],
    ]);
    expect(reading.problems).toEqual([
      "cell-shadowed c.v:1 'INV' both c.v and t.lib model INV; c.v, named first, decides",
    ]);
    expect(reading.diagnostics.hasErrors).toBe(false);
    expect(isInverter(reading)).toBe(true);
  });

  it('has that of the library named before the Verilog file', () => {
    const reading = readFiles([
      ['t.lib', library(inv)],
      ['t.v', top],
      ['c.v', other],
    ]);
    expect(reading.problems).toEqual([
      "cell-shadowed 2 'INV' both t.lib and c.v model INV; t.lib, named first, decides",
    ]);
    expect(isInverter(reading)).toBe(true);
  });

  it('has that of the first of several libraries, and of several in one library', () => {
    const two = readFiles([
      ['a.lib', library(inv)],
      ['t.v', top],
      ['t.lib', library(buf)],
    ]);
    expect(two.problems).toEqual([
      "cell-shadowed a.lib:2 'INV' both a.lib and t.lib model INV; a.lib, named first, decides",
    ]);
    expect(isInverter(two)).toBe(true);
    const one = readFiles([
      ['t.v', top],
      ['t.lib', library(inv + buf)],
    ]);
    expect(one.problems).toEqual([
      "cell-shadowed 2 'INV' t.lib models INV twice; the first model decides",
    ]);
    expect(isInverter(one)).toBe(true);
  });

  it('counts the files that a file includes to it', () => {
    const sources = [
      new Source('a.lib', 'library (a) { include_file (cells.inc); }'),
      new Source('t.v', `${top}\n\`include "more.v"\n`),
    ];
    const included = new Map([
      ['cells.inc', inv],
      ['more.v', other],
    ]);
    const chosen = [sources, sources.toReversed()].map((files) => {
      const diagnostics = new Diagnostics();
      const readInclude = (path: string) => new Source(path, included.get(path)!);
      const circuit = readNetlist(files, { readInclude }, diagnostics)!;
      expect(diagnostics.list.map(({ code }) => code)).toEqual(['cell-shadowed']);
      return signalValue(circuit, 'y', { a: 1 });
    });
    expect(chosen).toEqual([0, 1]);
  });

  it('may be a primitive in Verilog', () => {
    const udp = 'primitive INV(Y, A); output Y; input A; table 0 : 1; 1 : 0; endtable endprimitive';
    const reading = readFiles([
      ['t.v', top],
      ['t.lib', library(inv)],
      ['c.v', udp],
    ]);
    expect(reading.problems).toHaveLength(1);
    expect(isInverter(reading)).toBe(true);
  });

  it('needs no note while nothing uses it', () => {
    const netlist = 'module top(input a, output y); assign y = a; endmodule';
    const reading = readFiles(
      [
        ['t.v', `${netlist}\n${model}`],
        ['t.lib', library(inv)],
      ],
      'top',
    );
    expect(reading.problems).toEqual([]);
  });

  it('has one note for all cells of two files', () => {
    const names = Array.from({ length: 12 }, (_, i) => `N${i}`);
    const netlist = `module top(input a, output [11:0] y); ${names
      .map((name, i) => `${name} i${i}(.A(a), .Y(y[${i}]));`)
      .join(' ')} endmodule`;
    const many = (text: string) => names.map((name) => text.replace('INV', name)).join('\n');
    const files = [
      ['t.v', netlist],
      ['c.v', many(model)],
      ['t.lib', library(many(inv))],
    ] as const;
    const { problems } = readFiles(files);
    expect(problems).toEqual([
      "cell-shadowed c.v:1 'N0' both c.v and t.lib model N0, N1, N2, N3, N4, N5, N6, N7, N8, N9 " +
        'and 2 more; c.v, named first, decides',
    ]);
  });
});
