import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Span } from '../../../diagnostics/source.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import { listed } from '../../listed.js';
import type { NameId } from '../../names.js';
import { hintOf } from '../../nearest.js';
import { type InstanceTable, POSITIONAL } from '../instances.js';

const MOST_SHOWN = 20;

interface Unknown {
  readonly first: Position;
  /** Where its instances stand; each once, however often their module is elaborated. */
  readonly places: Set<Position>;
  readonly pins: Set<NameId>;
  positional: number;
}

/** What the report needs to know of the design. */
interface Texts {
  readonly diagnostics: Diagnostics;
  text(name: NameId): string;
  /** Names of all that an instance can be of. */
  definitionNames(): Iterable<string>;
  wordSpan(position: Position): Span;
}

/** Collects the instances of modules that no file defines, for one message about all of them. */
export class UnknownModules {
  readonly #texts: Texts;
  readonly #unknown = new Map<NameId, Unknown>();

  constructor(texts: Texts) {
    this.#texts = texts;
  }

  get isEmpty(): boolean {
    return this.#unknown.size === 0;
  }

  /** Puts an instance of an unknown module on record. */
  add(table: InstanceTable, instance: number): void {
    const name = table.module(instance);
    const first = table.position(instance);
    const known = this.#unknown.get(name);
    const unknown = known ?? { first, places: new Set(), pins: new Set(), positional: 0 };
    if (known === undefined) this.#unknown.set(name, unknown);
    unknown.places.add(first);
    const start = table.connectionStart(instance);
    const end = table.connectionStart(instance + 1);
    for (let connection = start; connection < end; connection++) {
      const port = table.connectionPort(instance, connection);
      if (port !== POSITIONAL) unknown.pins.add(port);
      else unknown.positional = Math.max(unknown.positional, connection - start + 1);
    }
  }

  /** Reports what was collected. */
  report(): void {
    const entries = [...this.#unknown];
    if (entries.length === 0) return;
    const shown = entries.slice(0, MOST_SHOWN);
    const more = entries.length - shown.length;
    const list =
      shown.map(([name, unknown]) => this.#describe(name, unknown)).join('; ') +
      (more > 0 ? `; and ${more} more modules` : '');
    const message =
      `no file defines ${list}. ` +
      'Add the file, such as a cell library, that defines the missing modules';
    const [first, ...others] = shown.map(([name, { first: place }]) => ({
      message: `the first instance of ${this.#texts.text(name)} is here`,
      span: this.#texts.wordSpan(place),
    }));
    this.#texts.diagnostics.add('module-unknown', message, first!.span, others);
  }

  #describe(name: NameId, { places, pins, positional }: Unknown): string {
    const instances = places.size === 1 ? '1 instance' : `${places.size} instances`;
    const names = listed([...pins].map((pin) => this.#texts.text(pin)));
    const named = pins.size === 0 ? '' : `, pins ${names}`;
    const placed = positional === 0 ? '' : `, ${positional} pins by position`;
    const text = this.#texts.text(name);
    const hint = hintOf(text, this.#texts.definitionNames());
    return `module ${text} (${instances}${named}${placed}${hint})`;
  }
}
