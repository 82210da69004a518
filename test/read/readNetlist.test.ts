import { describe, expect, it } from 'vitest';
import { gateInfo, isGate } from '../../compiler/circuit/gates.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { type NetlistReadOptions, readNetlist } from '../../compiler/read/readNetlist.js';

function read(files: Readonly<Record<string, string>>, options: NetlistReadOptions = {}) {
  const diagnostics = new Diagnostics();
  const sources = Object.entries(files).map(([path, text]) => new Source(path, text));
  const circuit = readNetlist(sources, options, diagnostics);
  const problems = diagnostics.list.map(({ code, span }) => `${code} ${span?.source.path}`);
  return { circuit, problems, message: diagnostics.list[0]?.message };
}

const top = 'module t (input a, output y); INV u (a, y); endmodule';
const library = 'module INV (input a, output y); not (y, a); endmodule';
const bench = 'INPUT(a)\nOUTPUT(y)\ny = NOT(a)';

describe('readNetlist', () => {
  it('reads several Verilog files as one design', () => {
    const { circuit, problems } = read({ 't.v': top, 'lib/cells.V': library });
    expect(problems).toEqual([]);
    expect(circuit!.name).toBe('t');
    expect(circuit!.sources.map(({ path }) => path)).toEqual(['t.v', 'lib/cells.V']);
  });

  it('knows the endings that flows give to their files, packed or not', () => {
    const named = 'module t (input a, output y); INV u (.a(a), .y(y)); endmodule';
    const cells =
      'library (t) { cell (INV) { pin (a) { } pin (y) { direction : output; function : "!a"; } } }';
    for (const ending of ['v', 'vg', 'gv', 'sv', 'verilog', 'V.GZ', 'v.gz']) {
      const files = { [`t.${ending}`]: named, 'cells.liberty': cells };
      expect(read(files).problems, ending).toEqual([]);
    }
    expect(read({ 't.v': named, 'cells.lib.gz': cells }).problems).toEqual([]);
    expect(read({ 'dir/c.bench.gz': bench }).circuit!.name).toBe('c');
    expect(read({ 'c.gz': bench }).problems).toEqual(['file-kind-unknown c.gz']);
  });

  it('reads the ISCAS text form', () => {
    expect(read({ 'dir.v/c.bench': bench }).circuit!.name).toBe('c');
    expect(read({ 'c.bench': bench }, { top: 'c' }).circuit!.name).toBe('c');
  });

  it('hands macros and included files on to the Verilog reader', () => {
    const text = '`include "cells.vh"\n`ifdef FULL\nmodule t; endmodule\n`endif';
    const readInclude = (path: string) => new Source(path, library);
    const { circuit } = read(
      { 't.v': text },
      { defines: new Map([['FULL', '']]), readInclude, top: 't' },
    );
    expect(circuit!.name).toBe('t');
    expect(circuit!.sources.map(({ path }) => path)).toEqual(['t.v', 'cells.vh']);
  });

  it('takes the top that is asked for', () => {
    expect(read({ 't.v': top, 'cells.v': library }, { top: 'INV' }).circuit!.name).toBe('INV');
  });

  it('does not elaborate a text with syntax errors', () => {
    const { circuit, problems } = read({ 't.v': `${top} module ;` });
    expect(circuit).toBeUndefined();
    expect(new Set(problems)).toEqual(new Set(['syntax-error t.v']));
  });

  it('reports every file whose ending it does not know', () => {
    const { circuit, problems } = read({ 'a.txt': '', netlist: '', 't.v': top });
    expect(circuit).toBeUndefined();
    expect(problems).toEqual(['file-kind-unknown a.txt', 'file-kind-unknown netlist']);
  });

  it('takes cells from a Liberty library', () => {
    const named = 'module t (input a, output y); INV u (.a(a), .y(y)); endmodule';
    const cells =
      'library (t) { cell (INV) { pin (a) { } pin (y) { direction : output; function : "!a"; } } }';
    const { circuit, problems } = read({ 't.v': named, 'cells.lib': cells });
    expect(problems).toEqual([]);
    expect(circuit!.sources.map(({ path }) => path)).toEqual(['t.v', 'cells.lib']);
    expect(read({ 't.v': top, 'cells.lib': '' }).problems).toEqual(['syntax-error cells.lib']);
  });

  it('takes the ISCAS text form alone and without top', () => {
    expect(read({ 't.v': top, 'c.bench': bench }).problems).toEqual(['file-kind-unknown c.bench']);
    expect(read({ 'c.bench': bench }, { top: 'x' }).problems).toEqual(['top-unknown c.bench']);
  });

  it('throws without any source', () => {
    expect(() => read({})).toThrow(RangeError);
  });
});

describe('replacements', () => {
  const design = `module t (input a, output y); cell_a u1 (a, n); cell_b u2 (n, y); endmodule
    module cell_a (input a, output y); old u (a, y); endmodule
    module old (input a, output y); cell_c u (a, y); endmodule
    module cell_b (input a, output y); buf (y, a); endmodule`;
  const models = `\`include "helper.vh"
    module cell_a (input a, output y); helper u (a, y); endmodule`;
  const helper = 'module helper (input a, output y); not (y, a); endmodule';
  const readInclude = (path: string) => new Source(path, helper);
  const replaced = (
    files: Readonly<Record<string, string>>,
    by: Record<string, [string, string]>,
  ) =>
    read(files, {
      readInclude,
      replacements: new Map(
        Object.entries(by).map(([name, [path, text]]) => [name, new Source(path, text)]),
      ),
    });
  const gates = ({ circuit }: ReturnType<typeof read>) =>
    Array.from(circuit!.kind)
      .filter((kind) => isGate(kind))
      .map((kind) => gateInfo(kind).name)
      .sort();

  it('take a module from the file given, and add what else is there', () => {
    const found = replaced({ 't.v': design }, { cell_a: ['new.v', models] });
    expect(found.problems).toEqual([]);
    expect(found.circuit!.name).toBe('t');
    expect(gates(found)).toEqual(['buf', 'not']);
  });

  it('may take several modules from one file', () => {
    const both = `${models} module cell_b (input a, output y); and (y, a, a); endmodule`;
    const found = replaced({ 't.v': design }, { cell_a: ['n.v', both], cell_b: ['n.v', both] });
    expect(found.problems).toEqual([]);
    expect(gates(found)).toEqual(['and', 'not']);
  });

  it('may come from a file that is named as a netlist too', () => {
    const found = replaced({ 'new.v': models, 't.v': design }, { cell_a: ['new.v', models] });
    expect(found.problems).toEqual([]);
    expect(gates(found)).toEqual(['buf', 'not']);
  });

  it('may be of modules that no other file defines', () => {
    const found = replaced({ 't.v': top }, { INV: ['lib.v', library] });
    expect(found.problems).toEqual([]);
    expect(gates(found)).toEqual(['not']);
  });

  it('go before the cells of a library', () => {
    const cells =
      'library (l) { cell (INV) { pin (a) { direction : input; } pin (y) { direction : output; function : "a"; } } }';
    const found = replaced(
      { 't.v': 'module t (input a, output y); INV u (.a(a), .y(y)); endmodule', 'c.lib': cells },
      { INV: ['lib.v', library] },
    );
    expect(found.problems).toEqual([]);
    expect(gates(found)).toEqual(['not']);
  });

  it('are reported where the file has no such module', () => {
    const found = replaced({ 't.v': top, 'l.v': library }, { INV: ['new.v', helper] });
    expect(found.problems).toEqual(['choice-unknown new.v']);
    expect(found.message).toContain('new.v defines no module INV');
    expect(found.message).toContain('it defines helper');
  });

  it('are Verilog', () => {
    const found = replaced({ 't.v': top }, { INV: ['c.bench', bench] });
    expect(found.problems).toEqual(['file-kind-unknown c.bench']);
    expect(replaced({ 't.v': top }, { INV: ['c.txt', bench] }).problems).toEqual([
      'file-kind-unknown c.txt',
    ]);
  });

  it('and black boxes are not of the ISCAS text form', () => {
    expect(replaced({ 'c.bench': bench }, { y: ['n.v', library] }).problems).toEqual([
      'choice-unknown c.bench',
    ]);
    expect(read({ 'c.bench': bench }, { blackBoxes: ['y'] }).problems).toEqual([
      'choice-unknown c.bench',
    ]);
  });
});
