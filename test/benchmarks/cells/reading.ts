import { libertyFile, libertyLibrary } from '../../../benchmarks/circuits/cells/liberty/library.js';
import {
  primitivesFile,
  verilogFile,
  verilogLibrary,
  verilogPrimitives,
} from '../../../benchmarks/circuits/cells/verilog/library.js';
import { type Design, designOf } from '../../../compiler/compile.js';
import { Diagnostics, InputError } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { includeReader } from '../../../compiler/read/verilog/includes.js';

/** The forms in which the library models its cells. */
export const models = ['timing', 'functional', 'liberty'] as const;

/** One of `models`. */
export type Model = (typeof models)[number];

const text = (chunks: Iterable<string>): string => [...chunks].join('');

const primitives = new TextEncoder().encode(text(verilogPrimitives()));
const files: Readonly<Record<Model, Source>> = {
  timing: new Source(verilogFile, text(verilogLibrary())),
  functional: new Source(verilogFile, text(verilogLibrary())),
  liberty: new Source(libertyFile, text(libertyLibrary())),
};

/** Reads a netlist of cells with the library in one of its forms; throws for anything reported. */
export function designWith(
  model: Model,
  netlist: string,
  { hasPower = false }: { readonly hasPower?: boolean } = {},
): Design {
  const defines = new Map<string, string>();
  if (model === 'functional') defines.set('HOBNAIL_FUNCTIONAL', '');
  if (hasPower) defines.set('USE_POWER_PINS', '1');
  const readInclude = includeReader([], (path) =>
    path === primitivesFile ? primitives : undefined,
  );
  const diagnostics = new Diagnostics();
  const sources = [new Source('netlist.v', netlist), files[model]];
  const circuit = readNetlist(sources, { defines, readInclude }, diagnostics);
  if (circuit === undefined || diagnostics.list.length > 0) throw new InputError(diagnostics.list);
  return designOf(circuit);
}
