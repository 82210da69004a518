import { describe, expect, it } from 'vitest';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { faultOfText, formOfText } from '../../compiler/read/textForm.js';

const verilog = '// a netlist\nmodule t (input a, output y);\n  not (y, a);\nendmodule\n';
const utf16 = Buffer.from(verilog, 'utf16le');
const bytesOf = (text: string) => new TextEncoder().encode(text);
const behind = (start: readonly number[], rest: Uint8Array) => Uint8Array.from([...start, ...rest]);

function read(files: Readonly<Record<string, string | Uint8Array>>) {
  const diagnostics = new Diagnostics();
  const all = new Map(Object.entries(files).map(([path, text]) => [path, new Source(path, text)]));
  const [first] = all.values();
  const readInclude = (path: string) => all.get(path);
  const circuit = readNetlist([first!], { readInclude }, diagnostics);
  const problems = diagnostics.list.map(({ code, message, span }) => {
    const { line, column } = span!.source.place(span!.start);
    return `${span!.source.path}:${line}:${column} ${code} ${message}`;
  });
  return { circuit, problems };
}

describe('a file that is no text', () => {
  it.each([
    ['in UTF-16', behind([0xff, 0xfe], utf16), /UTF-16; save it as UTF-8/],
    ['in UTF-16 with the high byte first', behind([0xfe, 0xff], utf16.swap16()), /UTF-16/],
    ['in UTF-16 without a mark', Buffer.from(verilog, 'utf16le'), /UTF-16/],
    ['compressed', behind([0x1f, 0x8b, 8, 0], bytesOf(verilog)), /gzip; unpack it/],
    ['in an archive', behind([0x50, 0x4b, 3, 4], bytesOf(verilog)), /ZIP archive; unpack it/],
    ['binary', behind([0x7f, 0x45, 0x4c, 0x46, 0, 0, 1], bytesOf(verilog)), /zero bytes/],
    ['of control characters', Uint8Array.from({ length: 40 }, (_, i) => 1 + (i % 8)), /no text/],
    ['with the ends of lines of old', bytesOf(verilog.replaceAll('\n', '\r')), /returns alone/],
  ])('is refused: %s', (_, bytes, message) => {
    expect(faultOfText(bytes)).toMatch(message);
    const { circuit, problems } = read({ 't.v': bytes });
    expect(circuit).toBeUndefined();
    expect(problems).toEqual([expect.stringMatching(/^t\.v:1:1 file-no-text t\.v (is|ends) /)]);
  });

  it('is refused where it is included', () => {
    const text = `\n  \`include "cells.vh"\n${verilog}`;
    const { problems } = read({ 't.v': text, 'cells.vh': behind([0x1f, 0x8b], bytesOf('x')) });
    expect(problems).toEqual([
      't.v:2:3 file-no-text the included file "cells.vh" is compressed by gzip; unpack it',
    ]);
  });

  it('is none with a byte order mark, letters of any script or returns before line feeds', () => {
    for (const text of [
      `\ufeff${verilog}`,
      `// größer ☃\n${verilog}`,
      verilog.replaceAll('\n', '\r\n'),
    ]) {
      expect(faultOfText(bytesOf(text))).toBeUndefined();
      expect(read({ 't.v': text }).problems).toEqual([]);
    }
    expect(faultOfText(new Uint8Array(0))).toBeUndefined();
  });
});

describe('a text under the ending of another form', () => {
  const bench = '# a comment\nINPUT(a)\nOUTPUT(y)\ny = NOT(a)\n';
  const liberty = '/* cells */\nlibrary (l) {\n}\n';

  it.each([
    ['t.bench', verilog, 'Verilog, whose files end in .v'],
    ['t.lib', verilog, 'Verilog, whose files end in .v'],
    ['t.v', bench, 'the ISCAS text form, whose files end in .bench'],
    ['t.v', liberty, 'a Liberty library, whose files end in .lib'],
    ['t.v', 'library ieee;\nuse ieee.std_logic_1164.all;\n', 'VHDL, which is not read'],
    ['t.v', '<!DOCTYPE html>\n<html></html>\n', 'a page for a browser'],
  ])('is refused with its own form: %s', (path, text, form) => {
    const { problems } = read({ [path]: text });
    expect(problems).toHaveLength(1);
    expect(problems[0]).toContain(`${path}:1:1 file-kind-unknown ${path} begins like ${form}`);
  });

  it('may be told by no more than its first words', () => {
    expect(formOfText(bytesOf('module = AND(a, b)\n'))).toBeUndefined();
    expect(formOfText(bytesOf('input = NOT(a)\n'))).toBeUndefined();
    expect(formOfText(bytesOf('library work "*.v";\n'))).toBeUndefined();
    expect(formOfText(bytesOf(''))).toBeUndefined();
  });
});
