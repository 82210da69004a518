import { describe, expect, it } from 'vitest';
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
    const cells =
      'library (t) { cell (INV) { pin (a) { } pin (y) { direction : output; function : "!a"; } } }';
    const { circuit, problems } = read({ 't.v': top, 'cells.lib': cells });
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
