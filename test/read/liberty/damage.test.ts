import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readFiles, readLibrary } from './reading.js';

/** A library with one of everything, each construct on a line of its own. */
const whole = `/* A library of our own. */
library ("demo") {
  delay_model : table_lookup;
  bus_naming_style : "%s[%d]" ;
  voltage_map (VDD, 1.0);
  define (mine, cell, string);
  include_file (types.inc);
  lu_table_template (t) { variable_1 : input_net_transition; index_1 ("1, 2"); }
  type (nibble) { base_type : array; data_type : bit; bit_width : 4; bit_from : 3; bit_to : 0; downto : true; }
  cell (NAND2) {
    area : 1.0
    pg_pin (VDD) { pg_type : primary_power; }
    leakage_power () { when : "!A & \\"B\\""; value : 0.1; }
    pin (A, B) { direction : input; capacitance : 0.1; }
    pin (Y) {
      direction : output; function : "!(A & B)'" ; // a comment
      timing () { related_pin : "A"; cell_rise (t) { values ("1, 2", \\
        "3, 4"); } }
    }
  }
  cell (DFF) {
    ff ("IQ", "IQN") { clocked_on : "CK"; next_state : "(D * SE') + (SI SE)"; clear : "!R";
      preset : "!S"; clear_preset_var1 : L; clear_preset_var2 : H; }
    pin (CK D SE SI R S) { direction : input; }
    pin (Q) { direction : output; function : "IQ"; }
    pin (QN) { direction : output; function : "IQN"; }
    test_cell () { pin (Q) { direction : output; } }
  }
  cell (LATB) {
    bus (D) { bus_type : nibble; direction : input; }
    latch_bank (IQ, IQN, 4) { enable : "!G"; data_in : "D"; }
    pin (G) { direction : input; }
    bus (Q) { bus_type : nibble; direction : output; function : "IQ"; pin (Q[1:0]) { function : "IQN"; } }
    bundle (P) { members (P0, P1); direction : output; function : "G"; }
  }
  cell (TBUF) {
    pin (A) { direction : input; }
    pin (Y) { direction : inout; function : "A"; three_state : "!A"; driver_type : "pull_up"; }
  }
  cell (CG) {
    clock_gating_integrated_cell : "latch_posedge";
    statetable ("CK E", "IQ") { table : "L L/H : - : L/H, \\
      H - : - : N"; }
    pin (CK, E) { direction : input; }
    pin (IQ) { direction : internal; internal_node : "IQ"; input_map : "CK E"; }
    pin (GCK) { direction : output; state_function : "CK & IQ"; }
  }
}
`;

const files = { 'types.inc': 'type (two) { bit_width : 2; }\n' };
const netlist = `module top(input a, output y);
  NAND2 n(.A(a), .Y(y)); DFF f(.D(a), .Q()); LATB l(.G(a)); CG g(.CK(a)); TBUF t(.A(a), .Y(b));
endmodule`;

type Change = readonly [place: number, removed: number, added: string];

const bits = ['{', '}', '(', ')', '"', '\\', ';', ':', ',', '/*', '*/', '//', '\n', "'", '[', '&'];
const added = fc.oneof(
  fc.array(fc.constantFrom(...bits), { maxLength: 3 }).map((parts) => parts.join('')),
  fc.string({ maxLength: 6, unit: 'binary' }),
  fc.tuple(fc.nat(whole.length), fc.nat(80)).map(([at, length]) => whole.slice(at, at + length)),
);
const change: fc.Arbitrary<Change> = fc.tuple(fc.nat(whole.length), fc.nat(30), added);

const damaged = (changes: readonly Change[]): string =>
  changes.reduce(
    (text, [place, removed, more]) => text.slice(0, place) + more + text.slice(place + removed),
    whole,
  );

describe('a damaged library', () => {
  it('is none as long as nothing is changed', () => {
    expect(readLibrary(whole, files).problems).toEqual([]);
    const alone = whole.replace('include_file (types.inc);', '');
    const { diagnostics } = readFiles([
      ['t.v', netlist],
      ['t.lib', alone],
    ]);
    expect(diagnostics.hasErrors).toBe(false);
  });

  it('is read to its end, and every problem has a place in it', () => {
    fc.assert(
      fc.property(fc.array(change, { minLength: 1, maxLength: 6 }), (changes) => {
        const text = damaged(changes);
        const { problems } = readLibrary(text, files);
        expect(problems.length).toBeLessThanOrEqual(101);
        for (const problem of problems) expect(problem).toMatch(/^[a-z-]+ (types\.inc:)?\d+ '/);
      }),
      { seed: 20260107, numRuns: 1500 },
    );
  });

  it('makes cells or problems, and nothing else', () => {
    fc.assert(
      fc.property(fc.array(change, { minLength: 1, maxLength: 4 }), (changes) => {
        const text = damaged(changes).replace('include_file (types.inc);', '');
        const { circuit, diagnostics } = readFiles([
          ['t.v', netlist],
          ['t.lib', text],
        ]);
        expect(circuit === undefined).toBe(diagnostics.hasErrors);
        for (const { span } of diagnostics.list) {
          if (span !== undefined) expect(span.end).toBeLessThanOrEqual(span.source.bytes.length);
        }
      }),
      { seed: 20260108, numRuns: 600 },
    );
  });

  it('may be any bytes', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 300 }), (bytes) => {
        expect(readLibrary(bytes).problems.length).toBeGreaterThan(0);
      }),
      { seed: 20260109, numRuns: 500 },
    );
  });

  it('loses no other cell with a brace of one', () => {
    const braces = [...whole.matchAll(/[{}]/g)].map(({ index }) => index);
    const last = whole.lastIndexOf('}');
    for (const place of braces) {
      if (place === last || place < whole.indexOf('cell (NAND2)')) continue;
      const { library, problems } = readLibrary(
        whole.slice(0, place) + whole.slice(place + 1),
        files,
      );
      expect(problems).not.toEqual([]);
      const names = library.cells.map(({ name }) => name);
      const intact = ['NAND2', 'DFF', 'LATB', 'TBUF', 'CG'].filter((name) => !names.includes(name));
      // A cell whose own opening brace is gone is the only one that may be lost.
      expect(intact.length).toBeLessThanOrEqual(1);
    }
  });
});
