import {
  DESCRIPTION_FORMAT,
  DESCRIPTION_SECTION,
  type Description,
  PROBES_SECTION,
} from './description.js';
import { identity } from './identity.js';
import { unfolded } from './tables.js';

/** A compiled module and what it says of itself. */
export interface DescribedModule<D extends Description = Description> {
  readonly module: WebAssembly.Module;
  readonly description: D;
  readonly probes: WebAssembly.Module | undefined;
}

// Several instances of one module share what was read from it.
const known = new WeakMap<WebAssembly.Module, Promise<DescribedModule>>();

/** Reads the description of a module. Throws TypeError where it is not that of this package. */
export function described<D extends Description>(
  module: WebAssembly.Module,
): Promise<DescribedModule<D>> {
  const earlier = known.get(module);
  const made = earlier ?? describe(module);
  if (earlier === undefined) known.set(module, made);
  // What it is was checked by `checkIdentity`.
  return made as Promise<DescribedModule<D>>;
}

async function describe(module: WebAssembly.Module): Promise<DescribedModule> {
  const [section] = WebAssembly.Module.customSections(module, DESCRIPTION_SECTION);
  if (section === undefined) {
    throw new TypeError(`expected the module of ${identity.name}, got one without a description`);
  }
  const description = unfolded(JSON.parse(new TextDecoder().decode(section))) as Description;
  checkIdentity(description);
  const [probes] = WebAssembly.Module.customSections(module, PROBES_SECTION);
  return { module, description, probes: probes && (await WebAssembly.compile(probes)) };
}

function checkIdentity({ format, lanes, netlist, model }: Description): void {
  if (format !== DESCRIPTION_FORMAT || lanes !== identity.lanes) {
    const own = `format ${DESCRIPTION_FORMAT} with ${identity.lanes} lanes`;
    throw new TypeError(`expected a module of ${own}, got format ${format} with ${lanes}`);
  }
  const { name, threeValued } = model.layout;
  if (netlist === identity.netlist && threeValued === identity.threeValued) return;
  const own = `${identity.name} (netlist ${identity.netlist}, ${valuesOf(identity.threeValued)})`;
  const other = `${name} (netlist ${netlist}, ${valuesOf(threeValued)})`;
  throw new TypeError(`expected the module of ${own}, got that of ${other}`);
}

const valuesOf = (threeValued: boolean): string => (threeValued ? '3 values' : '2 values');
