import { circuits } from '../../benchmarks/circuits/index.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf } from '../../compiler/compile.js';
import { Diagnostics, InputError } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { createEngine, type EngineName } from '../../compiler/engines.js';
import { type NetlistReadOptions, readNetlist } from '../../compiler/read/readNetlist.js';
import type { Engine } from '../../runtime/engine.js';

/** Reads the text of one of the project's own circuits; throws for anything the reader reports. */
export function ownDesign(name: string, parameters: Readonly<Record<string, number>> = {}): Design {
  const circuit = circuits.find((candidate) => candidate.name === name);
  if (circuit === undefined) throw new RangeError(`there is no circuit ${name}`);
  return designFrom(new Source(`${name}.v`, [...circuit.write(parameters)].join('')));
}

/** Reads a netlist into a design; throws for anything the reader reports. */
export function designFrom(source: Source, options: NetlistReadOptions = {}): Design {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([source], options, diagnostics);
  if (circuit === undefined || diagnostics.list.length > 0) throw new InputError(diagnostics.list);
  return designOf(circuit);
}

/** An engine of a design, powered up with the values that the netlist gives, else 0. */
export async function poweredEngine(design: Design, name: EngineName): Promise<Engine> {
  const engine = await createEngine(design, name);
  engine.reset(powerUpState(design.circuit, 'zero'));
  return engine;
}
