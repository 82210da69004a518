import { readFileSync } from 'node:fs';
import { expect } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { type CompileOptions, type Design, designOf } from '../../compiler/compile.js';
import { Diagnostics, headline } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { type NetlistReadOptions, readNetlist } from '../../compiler/read/readNetlist.js';

/** How a text is read: reading options, and data files by name. */
export interface Reading extends NetlistReadOptions {
  readonly files?: Readonly<Record<string, string>>;
}

/** Reads a text; returns the circuit, if any, and what was found as `code line:column` of a file. */
export function reading(text: string, { files = {}, ...options }: Reading = {}) {
  const diagnostics = new Diagnostics();
  const readInclude = (path: string): Source | undefined =>
    files[path] === undefined ? undefined : new Source(path, files[path]);
  const sources = [new Source('top.v', text)];
  const circuit = readNetlist(sources, { readInclude, ...options }, diagnostics);
  const found = diagnostics.list.map(({ code, span }) => {
    if (span === undefined) return code;
    const { line, column } = span.source.place(span.start);
    return `${code} ${span.source.path} ${line}:${column}`;
  });
  return { circuit, found, messages: diagnostics.list.map(headline) };
}

/** A circuit of a text that has no faults. */
export function circuitOfText(text: string, options: Reading = {}): Circuit {
  const { circuit, messages } = reading(text, options);
  expect(messages).toEqual([]);
  return circuit!;
}

/** The text of a file of `modules/`. */
export const moduleText = (file: string): string =>
  readFileSync(new URL(`modules/${file}`, import.meta.url), 'utf8');

/** A design of a file of `modules/`. */
export const moduleDesign = (file: string, options: Reading = {}, more?: CompileOptions): Design =>
  designOf(circuitOfText(moduleText(file), options), more);
