import type { Circuit } from '../circuit/circuit.js';
import type { Diagnostics } from '../diagnostics/diagnostics.js';
import type { Source } from '../diagnostics/source.js';
import { SourceMap } from '../diagnostics/sourceMap.js';
import { readBench } from './bench/readBench.js';
import { libertyCells } from './liberty/libertyCells.js';
import { readLiberty } from './liberty/readLiberty.js';
import { faultOfText, formOfText, type TextForm } from './textForm.js';
import { elaborate } from './verilog/elaborate/elaborate.js';
import { parseVerilog } from './verilog/parse.js';
import type { PreprocessOptions } from './verilog/preprocess.js';

/** What `readNetlist` may be told; all but `top` is for Verilog, `readInclude` for Liberty too. */
export interface NetlistReadOptions extends PreprocessOptions {
  /** Name of the top module; chosen by itself where only one can be meant. */
  readonly top?: string;
  /**
   * Names of modules of which the inside is left out: the outputs of an instance `u1` become
   * inputs of the circuit named `u1.q`, its inputs outputs named `u1.d`. No file need define such
   * a module where all its connections are named.
   */
  readonly blackBoxes?: readonly string[];
  /**
   * Arrays of variables with at least so many bits are held as memories and not as registers, if
   * they can be (default 257).
   */
  readonly memoriesFrom?: number;
  /**
   * By the name of a module the Verilog file that its definition is taken from, whatever other
   * files define under that name. The other modules of the file are added to the design.
   */
  readonly replacements?: ReadonlyMap<string, Source>;
}

/** The form of a netlist file by the ending of its name. */
const formOfEnding: Readonly<Record<string, 'verilog' | 'bench' | 'liberty'>> = {
  '.v': 'verilog',
  '.vh': 'verilog',
  '.vg': 'verilog',
  '.gv': 'verilog',
  '.sv': 'verilog',
  '.verilog': 'verilog',
  '.bench': 'bench',
  '.lib': 'liberty',
  '.liberty': 'liberty',
};

/**
 * Reads netlist files, together one design, into a circuit: `.v` and its like Verilog, `.lib` Liberty
 * cell libraries for it, `.bench` the ISCAS'89 text form, which stands alone; `.gz` behind these is
 * passed over. Where several files model a cell, the first one decides, and a note says so.
 *
 * Returns undefined if anything is wrong, having reported it. Throws RangeError without sources.
 */
export function readNetlist(
  sources: readonly Source[],
  options: NetlistReadOptions,
  diagnostics: Diagnostics,
): Circuit | undefined {
  const [first] = sources;
  if (first === undefined) throw new RangeError('expected at least one netlist, got none');
  const forms = sources.map((source) => formOf(source, diagnostics));
  if (forms.includes(undefined)) return undefined;
  const texts = [...sources, ...(options.replacements?.values() ?? [])];
  if (!texts.every((source) => isText(source, diagnostics))) return undefined;
  if (!forms.includes('bench')) {
    if (!areVerilog(options.replacements, diagnostics)) return undefined;
    return readVerilog(sources, options, diagnostics);
  }
  if (sources.length > 1) {
    const bench = sources[forms.indexOf('bench')]!;
    const message = `${bench.path} is a whole circuit in the ISCAS text form; give it alone`;
    reportFile(bench, message, diagnostics);
    return undefined;
  }
  const [name] = [...(options.blackBoxes ?? []), ...(options.replacements?.keys() ?? [])];
  if (name !== undefined) {
    const message = `the ISCAS text form has no modules, and so no ${name} to leave out or replace`;
    diagnostics.add('choice-unknown', message, { source: first, start: 0, end: 0 });
    return undefined;
  }
  const circuit = readBench(first, diagnostics);
  if (circuit === undefined || options.top === undefined || options.top === circuit.name) {
    return circuit;
  }
  const message = `the ISCAS text form has no modules, and so no ${options.top}; leave --top out`;
  diagnostics.add('top-unknown', message, { source: first, start: 0, end: 0 });
  return undefined;
}

function readVerilog(
  sources: readonly Source[],
  options: NetlistReadOptions,
  diagnostics: Diagnostics,
): Circuit | undefined {
  const sourceMap = new SourceMap();
  const errors = errorsIn(diagnostics);
  const isLibrary = (source: Source): boolean => formOf(source, diagnostics) === 'liberty';
  const replacements = onePerPath(options.replacements ?? new Map());
  const replacing = new Map([...replacements.values()].map((source) => [source.path, source]));
  const netlists = sources.filter((source) => !isLibrary(source) && !replacing.has(source.path));
  const verilog = [...netlists, ...replacing.values()];
  const syntax = parseVerilog(verilog, options, sourceMap, diagnostics);
  const libraries = sources
    .filter(isLibrary)
    .map((source) => readLiberty(source, options, sourceMap, diagnostics));
  // The tree of a text with errors has gaps; what they would lead to says nothing of the text.
  if (errorsIn(diagnostics) > errors) return undefined;
  const { top, blackBoxes = [], readInclude, memoriesFrom } = options;
  const cells = libertyCells(libraries, syntax.names, sources, sourceMap);
  const elaborateOptions = {
    ...{ cells, blackBoxes, replacements, memoriesFrom },
    ...(top !== undefined && { top }),
    ...(readInclude !== undefined && { readInclude }),
  };
  return elaborate(syntax, elaborateOptions, sourceMap, diagnostics);
}

function areVerilog(
  replacements: ReadonlyMap<string, Source> | undefined,
  diagnostics: Diagnostics,
): boolean {
  for (const [name, source] of replacements ?? []) {
    const form = formOf(source, diagnostics);
    if (form === 'verilog') continue;
    const message = `${source.path} is no Verilog file, which the replacement of ${name} must be`;
    if (form !== undefined) reportFile(source, message, diagnostics);
    return false;
  }
  return true;
}

/** The replacements with one source for each file: it is read once, whatever it replaces. */
function onePerPath(replacements: ReadonlyMap<string, Source>): Map<string, Source> {
  const known = new Map<string, Source>();
  for (const source of replacements.values()) {
    if (!known.has(source.path)) known.set(source.path, source);
  }
  return new Map([...replacements].map(([name, { path }]) => [name, known.get(path)!]));
}

function errorsIn({ list }: Diagnostics): number {
  return list.reduce((count, { severity }) => (severity === 'error' ? count + 1 : count), 0);
}

// Before `.gz`: who made the source has unpacked it.
const endingOf = ({ path }: Source): string =>
  /(\.[^./\\]*?)(?:\.gz)?$/i.exec(path)?.[1]?.toLowerCase() ?? '';

function formOf(source: Source, diagnostics: Diagnostics) {
  const ending = endingOf(source);
  const form = formOfEnding[ending];
  if (form !== undefined) return form;
  const message =
    `the ending ${ending === '' ? 'is missing and' : ending} tells no form; rename it ` +
    'to .v for Verilog, .lib for Liberty or .bench for the ISCAS text form';
  reportFile(source, message, diagnostics);
  return undefined;
}

const formNames: Readonly<Record<TextForm, string>> = {
  verilog: 'Verilog, whose files end in .v',
  bench: 'the ISCAS text form, whose files end in .bench',
  liberty: 'a Liberty library, whose files end in .lib',
  vhdl: 'VHDL, which is not read; translate it to Verilog',
  markup: 'a page for a browser; fetch the netlist itself',
};

/** Whether a file is a text, and of the form that its ending tells; reports it if not. */
function isText(source: Source, diagnostics: Diagnostics): boolean {
  const fault = faultOfText(source.bytes);
  if (fault !== undefined) {
    const message = `${source.path} ${fault}`;
    diagnostics.add('file-no-text', message, { source, start: 0, end: 0 });
    return false;
  }
  const looks = formOfText(source.bytes);
  const form = formOfEnding[endingOf(source)];
  if (looks === undefined || form === undefined || looks === form) return true;
  reportFile(source, `${source.path} begins like ${formNames[looks]}`, diagnostics);
  return false;
}

function reportFile(source: Source, message: string, diagnostics: Diagnostics): void {
  diagnostics.add('file-kind-unknown', message, { source, start: 0, end: 0 });
}
