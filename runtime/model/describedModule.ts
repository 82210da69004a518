import {
  DESCRIPTION_FORMAT,
  DESCRIPTION_SECTION,
  type ModelDescription,
  PROBES_SECTION,
} from './description.js';
import { identity } from './identity.js';
import { unfolded } from './tables.js';

/** A compiled module and what it says of itself. */
export interface DescribedModule {
  readonly module: WebAssembly.Module;
  readonly description: ModelDescription;
  readonly probes: WebAssembly.Module | undefined;
}

// Several instances of one module share what was read from it.
const known = new WeakMap<WebAssembly.Module, Promise<DescribedModule>>();

/** Reads the description of a module. Throws TypeError where it is not that of this package. */
export function described(module: WebAssembly.Module): Promise<DescribedModule> {
  const earlier = known.get(module);
  if (earlier !== undefined) return earlier;
  const made = describe(module);
  known.set(module, made);
  return made;
}

async function describe(module: WebAssembly.Module): Promise<DescribedModule> {
  const [section] = WebAssembly.Module.customSections(module, DESCRIPTION_SECTION);
  if (section === undefined) {
    throw new TypeError(`expected the module of ${identity.name}, got one without a description`);
  }
  const description = unfolded(JSON.parse(new TextDecoder().decode(section))) as ModelDescription;
  checkIdentity(description);
  const [probes] = WebAssembly.Module.customSections(module, PROBES_SECTION);
  return { module, description, probes: probes && (await WebAssembly.compile(probes)) };
}

function checkIdentity({ format, lanes, netlist, model }: ModelDescription): void {
  if (format !== DESCRIPTION_FORMAT || lanes !== 1) {
    const expected = `a module of format ${DESCRIPTION_FORMAT} with 1 lane`;
    throw new TypeError(`expected ${expected}, got format ${format} with ${lanes}`);
  }
  const { name, threeValued } = model.layout;
  if (netlist === identity.netlist && threeValued === identity.threeValued) return;
  const own = `${identity.name} (netlist ${identity.netlist}, ${valuesOf(identity.threeValued)})`;
  const other = `${name} (netlist ${netlist}, ${valuesOf(threeValued)})`;
  throw new TypeError(`expected the module of ${own}, got that of ${other}`);
}

const valuesOf = (threeValued: boolean): string => (threeValued ? '3 values' : '2 values');
