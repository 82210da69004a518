import { designOf } from '../../../compiler/compile.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { type Inspection, inspect } from '../../../compiler/report/inspection.js';
import { type SmallCircuit, smallCircuit } from '../../support/smallCircuit.js';

/** Reads a netlist, Verilog unless the path says otherwise, and inspects it. */
export function inspectNetlist(text: string, path = 'top.v'): Inspection {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source(path, text)], {}, diagnostics);
  diagnostics.throwIfErrors();
  return inspect(designOf(circuit!), diagnostics.list);
}

/** Inspects a circuit that is written out. */
export const inspectSmall = (spec: SmallCircuit): Inspection =>
  inspect(designOf(smallCircuit(spec)), []);
