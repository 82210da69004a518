import type { NetId } from '../../../circuit/ids.js';
import type { Statement } from '../syntax.js';
import type { Context, Exits } from './context.js';
import { mergeExits } from './exits.js';
import { lowerCondition } from './expressions.js';
import type { Branch } from './store.js';

/** A branch that was executed, and the condition under which it is the one. */
interface Taken {
  readonly condition: NetId;
  readonly branch: Branch;
  readonly exits: Exits | undefined;
}

/**
 * Executes alternatives in order of priority: each under its condition, the last otherwise.
 *
 * Branches that can never be taken are not executed. All see the store as it is before, so a long
 * chain of them nests no deeper than a single one. Where a condition is x, the branches merge as a
 * multiplexer does, see `Store`.
 */
export class Alternatives {
  readonly #context: Context;
  readonly #taken: Taken[] = [];
  #last: Statement | undefined;
  #isDecided = false;

  constructor(context: Context) {
    this.#context = context;
  }

  /** Adds an alternative; returns whether later ones can still be reached. */
  add(condition: NetId, body: Statement): boolean {
    const { store, services, logic } = this.#context;
    const chosen = logic.valueOf(condition);
    if (chosen === 0) return true;
    if (chosen === 1) {
      this.#last = body;
      this.#isDecided = true;
      return false;
    }
    store.enter();
    const exits = services.execute(body, this.#context);
    this.#taken.push({ condition, branch: store.leave(), exits });
    return true;
  }

  /** Lets the alternatives take effect, with what happens if none of them is taken. */
  finish(otherwise: Statement | undefined): Exits | undefined {
    const { store, services, logic } = this.#context;
    const last = this.#isDecided ? this.#last : otherwise;
    if (this.#taken.length === 0) return last && services.execute(last, this.#context);
    store.enter();
    let exits = last && services.execute(last, this.#context);
    let branch = store.leave();
    for (const taken of this.#taken.reverse()) {
      branch = store.merge(taken.condition, taken.branch, branch);
      exits = mergeExits(taken.condition, taken.exits, exits, logic);
    }
    store.apply(branch);
    return exits;
  }
}

/** Executes an `if` with all its `else if` (clause 9.4). */
export function executeIf(
  statement: Extract<Statement, { kind: 'if' }>,
  context: Context,
): Exits | undefined {
  const alternatives = new Alternatives(context);
  let rest: Statement | undefined = statement;
  while (rest?.kind === 'if') {
    if (!alternatives.add(lowerCondition(rest.condition, context), rest.whenTrue)) break;
    rest = rest.whenFalse;
  }
  return alternatives.finish(rest);
}
