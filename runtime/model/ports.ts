import type { ModelLayout, PortLayout } from '../layout.js';
import { shown } from './values.js';

/** The ports of a model by name, with messages for names that are none. */
export class Ports {
  readonly #inputs: ReadonlyMap<string, PortLayout>;
  readonly #outputs: ReadonlyMap<string, PortLayout>;
  readonly #layout: ModelLayout;

  constructor(layout: ModelLayout) {
    this.#layout = layout;
    this.#inputs = byName(layout.inputs.ports);
    this.#outputs = byName(layout.outputs.ports);
  }

  /** The input port of a name. Throws RangeError where it is none. */
  input(name: string): PortLayout {
    const port = this.#inputs.get(name);
    if (port !== undefined) return port;
    if (this.#layout.clocks.includes(name)) {
      throw new RangeError(`expected an input, got clock ${name}, which ticks by itself`);
    }
    throw new RangeError(`expected an input (${listed(this.#inputs)}), got ${shown(name)}`);
  }

  /** The output port of a name. Throws RangeError where it is none. */
  output(name: string): PortLayout {
    const port = this.#outputs.get(name);
    if (port !== undefined) return port;
    throw new RangeError(`expected an output (${listed(this.#outputs)}), got ${shown(name)}`);
  }

  /** An output port or an input port, undefined where the name is none of them. */
  find(name: string): FoundPort | undefined {
    const output = this.#outputs.get(name);
    if (output !== undefined) return { port: output, isInput: false };
    const input = this.#inputs.get(name);
    return input && { port: input, isInput: true };
  }

  /** The same. Throws RangeError where the name is none of them. */
  any(name: string): FoundPort {
    const found = this.find(name);
    if (found !== undefined) return found;
    const all = listed(new Map([...this.#outputs, ...this.#inputs]));
    throw new RangeError(`expected a port (${all}), got ${shown(name)}`);
  }
}

/** A port, and which way it goes. */
export interface FoundPort {
  readonly port: PortLayout;
  readonly isInput: boolean;
}

/** Checks a list of names. Throws TypeError for anything else. */
export function checkNames(names: readonly string[]): readonly string[] {
  if (Array.isArray(names)) return names;
  throw new TypeError(`expected a list of port names, got ${shown(names)}`);
}

const byName = (ports: readonly PortLayout[]): Map<string, PortLayout> =>
  new Map(ports.map((port) => [port.name, port]));

const MOST_LISTED = 12;

function listed(ports: ReadonlyMap<string, PortLayout>): string {
  const names = [...ports.keys()];
  if (names.length === 0) return 'there is none';
  const rest = names.length > MOST_LISTED ? ', …' : '';
  return `${names.slice(0, MOST_LISTED).join(', ')}${rest}`;
}
