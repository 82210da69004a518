import type { Module, Piece, Signal } from '../design/model.js';
import type { Choices } from './choices.js';
import type { ExpressionWriter } from './expressions.js';

/** What the writers of one module's items share. */
export class ItemContext {
  readonly writer: ExpressionWriter;
  readonly module: Module;
  /** Signals that an `always` assigns. */
  readonly variables = new Set<Signal>();
  /** Signals that are declared where they are driven. */
  readonly declared = new Set<Signal>();
  /** The type word of the nets that are no plain wire. */
  readonly netTypes = new Map<Signal, string>();
  /** Power-up values that the declaration gives. */
  readonly initialValues = new Map<Signal, string>();
  /** Cells of our own that are used, by name: see `helpers.ts`. */
  readonly helpers: Set<string>;
  #count = 0;

  constructor(module: Module, writer: ExpressionWriter, helpers: Set<string>) {
    this.module = module;
    this.writer = writer;
    this.helpers = helpers;
  }

  get choices(): Choices {
    return this.writer.choices;
  }

  /** A name that nothing else in the module has. */
  fresh(letter: string): string {
    return `z_${letter}${this.#count++}`;
  }

  /** The name of a signal. */
  name({ name }: Signal): string {
    return this.writer.id(name);
  }

  /** The bits of a piece, least significant first, each as text; the piece must have a name. */
  bits({ signal, low, width, zeros }: Piece): string[] {
    const own = Array.from({ length: width }, (_, i) => this.writer.bit(signal, low + i));
    return [...own, ...new Array<string>(zeros).fill("1'b0")];
  }

  /** Whether all pieces have names, so that single bits of them can be written. */
  areNamed(pieces: readonly Piece[]): boolean {
    return pieces.every(({ signal }) => !this.writer.inlined.has(signal));
  }

  /** Whether any of the pieces can change, without which an `always @*` never runs. */
  canChange(pieces: readonly Piece[]): boolean {
    return pieces.some(({ signal }) => {
      const inner = this.writer.inlined.get(signal);
      return inner === undefined ? signal.role !== 'parameter' : this.canChange(inner.pieces);
    });
  }
}
