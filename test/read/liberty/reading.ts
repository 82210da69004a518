import { expect } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { type Diagnostic, Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { SourceMap } from '../../../compiler/diagnostics/sourceMap.js';
import type { LibertyCell, LibertyLibrary } from '../../../compiler/read/liberty/cell.js';
import { readLiberty } from '../../../compiler/read/liberty/readLiberty.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';

/** What a library reads as, and its problems in the form of `problemOf`. */
export interface LibraryReading {
  readonly library: LibertyLibrary;
  readonly problems: readonly string[];
}

/** `CODE FILE:LINE 'SPANNED TEXT' MESSAGE`, without the file where it is the main one. */
export function problemOf({ code, span, message }: Diagnostic): string {
  if (span === undefined) return `${code} ${message}`;
  const { source, start, end } = span;
  const file = source.path === 't.lib' ? '' : `${source.path}:`;
  return `${code} ${file}${source.place(start).line} '${source.slice(start, end)}' ${message}`;
}

/** Reads a library; `files` are what it may include. */
export function readLibrary(
  text: string | Uint8Array,
  files: Readonly<Record<string, string>> = {},
): LibraryReading {
  const diagnostics = new Diagnostics();
  const readInclude = (path: string): Source | undefined => {
    const content = files[path];
    return content === undefined ? undefined : new Source(path, content);
  };
  const source = new Source('t.lib', text);
  const library = readLiberty(source, { readInclude }, new SourceMap(), diagnostics);
  return { library, problems: diagnostics.list.map(problemOf) };
}

/** The cells of a library without problems, given as the statements of its library group. */
export function cellsOf(statements: string): readonly LibertyCell[] {
  const { library, problems } = readLibrary(`library (t) {\n${statements}\n}`);
  expect(problems).toEqual([]);
  return library.cells;
}

/** The only cell of a library, given as the statements of its cell group. */
export function cellOf(statements: string): LibertyCell {
  const [cell, ...others] = cellsOf(`cell (C) {\n${statements}\n}`);
  expect(others).toEqual([]);
  return cell!;
}

/** A design read from several files. */
export interface DesignReading {
  readonly circuit: Circuit | undefined;
  readonly diagnostics: Diagnostics;
  readonly problems: readonly string[];
}

/** Reads files, in order, as one design. */
export function readFiles(
  files: readonly (readonly [string, string | Uint8Array])[],
  top?: string,
): DesignReading {
  const diagnostics = new Diagnostics();
  const sources = files.map(([path, text]) => new Source(path, text));
  const circuit = readNetlist(sources, top === undefined ? {} : { top }, diagnostics);
  return { circuit, diagnostics, problems: diagnostics.list.map(problemOf) };
}

/** A circuit that is one cell, its ports being those of the circuit, in the order of the library. */
export function cellDesign(statements: string): DesignReading {
  const { ports } = cellOf(statements);
  const range = (port: (typeof ports)[number]): string =>
    port.range === undefined ? '' : `[${port.range.from}:${port.range.to}] `;
  const header = ports.map((port) => `${port.direction} ${range(port)}\\${port.name} `).join(', ');
  const pins = ports.map(({ name }) => `.\\${name} (\\${name} )`).join(', ');
  return readFiles([
    ['t.v', `module top(${header});\n  C c(${pins});\nendmodule`],
    ['t.lib', `library (t) {\ncell (C) {\n${statements}\n}\n}`],
  ]);
}

/** The circuit of a cell without problems. */
export function cellCircuit(statements: string): Circuit {
  const { circuit, problems } = cellDesign(statements);
  expect(problems).toEqual([]);
  return circuit!;
}
