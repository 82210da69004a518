import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Span } from '../../../diagnostics/source.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import { listed } from '../../listed.js';
import type { NameId } from '../../names.js';

/** A cell with two models, of which the one at `chosen` decides. */
export interface Shadowed {
  readonly name: NameId;
  readonly chosen: Position;
  readonly other: Position;
}

/** What the report needs to know of the design. */
interface Texts {
  readonly diagnostics: Diagnostics;
  text(name: NameId): string;
  wordSpan(position: Position): Span;
}

/** How many names a message lists. */
const MAX_LISTED = 10;

/** Collects the cells in use that several files model, for one note per pair of files. */
export class ShadowedModels {
  readonly #texts: Texts;
  readonly #found = new Map<string, Shadowed[]>();

  constructor(texts: Texts) {
    this.#texts = texts;
  }

  add(shadowed: Shadowed): void {
    const key = `${this.#path(shadowed.chosen)}\n${this.#path(shadowed.other)}`;
    const known = this.#found.get(key);
    if (known === undefined) this.#found.set(key, [shadowed]);
    else known.push(shadowed);
  }

  /** Reports what was collected. */
  report(): void {
    for (const models of this.#found.values()) {
      const { chosen, other } = models[0]!;
      const names = models.map(({ name }) => this.#texts.text(name));
      const list = listed(names, MAX_LISTED);
      const [path, otherPath] = [this.#path(chosen), this.#path(other)];
      const message =
        path === otherPath
          ? `${path} models ${list} twice; the first model decides`
          : `both ${path} and ${otherPath} model ${list}; ${path}, named first, decides`;
      this.#texts.diagnostics.add('cell-shadowed', message, this.#texts.wordSpan(chosen), [
        { message: 'this model is not used', span: this.#texts.wordSpan(other) },
      ]);
    }
  }

  #path(position: Position): string {
    return this.#texts.wordSpan(position).source.path;
  }
}
