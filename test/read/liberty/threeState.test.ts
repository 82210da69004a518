import { describe, expect, it } from 'vitest';
import { play, referenceFor } from '../../support/rows.js';
import { cellDesign, readFiles } from './reading.js';

const cells = `library (t) {
  cell (TBUF) { pin (A, E) { direction : input; }
    pin (Y) { direction : output; function : "A"; three_state : "!E"; } }
  cell (OD) { pin (A) { direction : input; }
    pin (Y) { direction : output; function : "A"; driver_type : open_drain; } }
  cell (OS) { pin (A) { direction : input; }
    pin (Y) { direction : output; function : "A"; driver_type : "open_source"; } }
  cell (UP) { pin (A, E) { direction : input; }
    pin (Y) { direction : output; function : "A"; three_state : "!E"; driver_type : "pull_up"; } }
  cell (SOFT) { pin (A) { direction : input; }
    pin (Y) { direction : output; function : "A"; driver_type : "resistive"; } }
  cell (KEEP) { pin (Y) { direction : inout; driver_type : "bus_hold"; } }
  cell (HIGH) { pin (Y) { direction : output; driver_type : pull_up; } }
  cell (HELD) { pin (A, E) { direction : input; }
    pin (Y) { direction : output; function : "A"; three_state : "!E"; driver_type : bus_hold; } }
  cell (PAD) { pin (I, OE) { direction : input; }
    pin (P) { direction : inout; function : "I"; three_state : "!OE"; }
    pin (C) { direction : output; function : "P"; } }
}`;

/** The values of bus y for rows of inputs, three-valued. */
function bus(inputs: string, instances: string, rows: readonly string[]): string[] {
  const { circuit, problems } = readFiles([
    ['t.v', `module top(${inputs}, output y); wire b; ${instances} buf (y, b); endmodule`],
    ['t.lib', cells],
  ]);
  expect(problems).toEqual([]);
  return play(referenceFor(circuit!, true), rows);
}

describe('a pin with three_state', () => {
  it('drives while the function is 0, alone or with others', () => {
    const two = 'TBUF s(.A(a), .E(d), .Y(b)), t(.A(c), .E(e), .Y(b));';
    const rows = ['0 1 1 0', '1 1 0 0', '1 0 0 1', '0 0 1 1', '1 1 1 1', '0 0 0 0', '0 1 1 1'];
    expect(bus('input a, d, c, e', two, rows)).toEqual(['0', '1', '0', '1', '1', 'x', 'x']);
  });

  it('may be pulled where nothing drives it', () => {
    const up = 'UP s(.A(a), .E(d), .Y(b));';
    expect(bus('input a, d', up, ['0 1', '1 1', '0 0', '1 0'])).toEqual(['0', '1', '1', '1']);
  });

  it('may be read inside its own cell', () => {
    const { circuit, problems } = readFiles([
      [
        't.v',
        `module top(input i, o, j, p, output c, d); wire b;
          PAD s(.I(i), .OE(o), .P(b), .C(c)), t(.I(j), .OE(p), .P(b), .C(d)); endmodule`,
      ],
      ['t.lib', cells],
    ]);
    expect(problems).toEqual([]);
    const rows = ['0100', '1100', '0010', '0011', '1001'];
    expect(play(referenceFor(circuit!, true), rows)).toEqual(['0 0', '1 1', 'x x', '1 1', '0 0']);
  });

  it('is faulty with a faulty function', () => {
    const pin = 'pin (Y) { direction : output; function : "A"; three_state : "Z"; }';
    expect(cellDesign(`pin (A) { direction : input; }\n${pin}`).problems).toEqual([
      "name-undeclared 4 'Z' Z is no pin or state of cell C",
    ]);
  });
});

describe('a pin with a driver_type', () => {
  it('that is open drives one of its values only', () => {
    const drains = 'OD s(.A(a), .Y(b)), t(.A(c), .Y(b)); pullup (b);';
    expect(bus('input a, c', drains, ['0 0', '0 1', '1 0', '1 1'])).toEqual(['0', '0', '0', '1']);
    const sources = 'OS s(.A(a), .Y(b)), t(.A(c), .Y(b)); pulldown (b);';
    expect(bus('input a, c', sources, ['0 0', '0 1', '1 0', '1 1'])).toEqual(['0', '1', '1', '1']);
  });

  it('that is resistive gives way to others', () => {
    const both = 'SOFT s(.A(a), .Y(b)); TBUF t(.A(c), .E(e), .Y(b));';
    const rows = ['0 1 0', '1 0 0', '0 1 1', '1 0 1'];
    expect(bus('input a, c, e', both, rows)).toEqual(['0', '1', '1', '0']);
  });

  it('may do no more than to keep or to pull its bus', () => {
    const rows = ['0 1', '0 0', '1 0', '1 1', '0 0'];
    const keep = 'TBUF s(.A(a), .E(d), .Y(b)); KEEP k(.Y(b));';
    expect(bus('input a, d', keep, rows)).toEqual(['0', '0', '0', '1', '1']);
    const held = 'HELD s(.A(a), .E(d), .Y(b));';
    expect(bus('input a, d', held, rows)).toEqual(['0', '0', '0', '1', '1']);
    const high = 'TBUF s(.A(a), .E(d), .Y(b)); HIGH k(.Y(b));';
    expect(bus('input a, d', high, rows)).toEqual(['0', '1', '1', '1', '1']);
  });

  it('of another kind is refused', () => {
    const pin = 'pin (Y) { direction : output; function : "A"; driver_type : "schmitt"; }';
    expect(cellDesign(`pin (A) { direction : input; }\n${pin}`).problems).toEqual([
      "not-supported 4 'schmitt' pin Y of cell C has the driver_type schmitt, which is not " +
        'supported; give the cell a Verilog model in a file that is named before the library',
    ]);
  });
});
