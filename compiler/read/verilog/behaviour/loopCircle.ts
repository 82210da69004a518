import type { SignalBinding } from '../scope.js';
import type { Statement } from '../syntax.js';
import { knownOf } from './bits.js';
import type { Context } from './context.js';
import { forEachName, meaningOf } from './names.js';
import { pathText, report } from './report.js';
import { contains } from './walk.js';

type ForStatement = Extract<Statement, { kind: 'for' }>;

/** Turns after the first that are not looked at, as nearly all loops end among them. */
const BLIND_TURNS = 500;

/** Sees whether a `for` loop goes in circles, because its index is too narrow for its end. */
export class LoopCircle {
  readonly #statement: ForStatement;
  readonly #context: Context;
  readonly #values = new Set<bigint>();
  #index: SignalBinding | undefined;
  #value: bigint | undefined;
  #turn = 0;

  /** To be made once the index has its first value. */
  constructor(statement: ForStatement, context: Context) {
    this.#statement = statement;
    this.#context = context;
    const { target } = statement.initial;
    const index = target.kind === 'name' ? meaningOf(target, context) : undefined;
    if (index?.kind === 'signal') this.#index = index;
    this.startTurn();
  }

  /** Takes note of the index before a turn; a value that it had before ends all unrolling. */
  startTurn(): void {
    const turn = this.#turn++;
    if (turn > 0 && turn <= BLIND_TURNS) return;
    this.#value = this.#valueNow();
    if (this.#index === undefined || this.#value === undefined) return;
    if (!this.#values.has(this.#value)) {
      this.#values.add(this.#value);
    } else if (decidesAlone(this.#index, this.#statement, this.#context)) {
      this.#report(this.#index, this.#value);
    } else {
      this.#index = undefined;
    }
  }

  /** Looks whether the body, which has just been executed, has left the index alone. */
  endTurn(): void {
    if (this.#turn > 1 && this.#turn <= BLIND_TURNS + 1) return;
    if (this.#valueNow() !== this.#value) this.#index = undefined;
  }

  #valueNow(): bigint | undefined {
    const { store, logic } = this.#context;
    if (this.#index === undefined) return undefined;
    const value = store.known(this.#index.nets);
    if (value !== undefined) return value;
    const bits = this.#index.nets.map((net) => store.read(net));
    const known = knownOf(bits, logic);
    return known?.unknown === 0n ? known.value : undefined;
  }

  #report(index: SignalBinding, value: bigint): void {
    const { scope, store } = this.#context;
    store.aborted = true;
    const message =
      `\`${pathText(scope.shared, [index.name])}\` comes back to ${value} before this loop ends; ` +
      'declare it wider, or as an integer';
    report(scope.shared, 'loop-unbounded', this.#statement.condition, message);
  }
}

/** Whether nothing but the index tells how a loop goes on. */
function decidesAlone(
  index: SignalBinding,
  { condition, step, body }: ForStatement,
  context: Context,
): boolean {
  if (contains(condition, 'call') || contains(step.value, 'call')) return false;
  if (contains(body, 'disable')) return false;
  let isAlone = true;
  forEachName([condition, step.target, step.value], (name) => {
    const binding = meaningOf(name, context);
    isAlone &&=
      binding?.kind === 'parameter' ||
      (binding?.kind === 'signal' && binding.nets[0] === index.nets[0]);
  });
  return isAlone;
}
