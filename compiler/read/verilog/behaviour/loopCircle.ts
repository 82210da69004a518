import { listed } from '../../listed.js';
import type { NameId } from '../../names.js';
import type { SignalBinding } from '../scope.js';
import type { AssignStatement } from '../syntax.js';
import type { Context } from './context.js';
import { type Loop, numberIn, numbersIn, steeringVariables } from './loopState.js';
import { forEachName, meaningOf, plainMeaningOf } from './names.js';
import { pathText, report } from './report.js';
import { contains } from './walk.js';

/** Turns after the first that are not looked at, as nearly all loops end among them. */
const BLIND_TURNS = 500;

const nearer = 'let each turn bring it nearer to its end';

/**
 * Sees whether a loop can never end: because nothing changes what its end depends on, because its
 * index is too narrow for its end, or because all that steers it comes back to what it was.
 */
export class LoopCircle {
  readonly #loop: Loop;
  readonly #context: Context;
  readonly #values = new Set<bigint>();
  readonly #states = new Set<string>();
  #index: SignalBinding | undefined;
  #value: bigint | undefined;
  #steering: readonly SignalBinding[] | undefined;
  #turn = 0;

  /** To be made once the index, that of a `for` loop, has its first value by `initial`. */
  constructor(loop: Loop, context: Context, initial?: AssignStatement) {
    this.#loop = loop;
    this.#context = context;
    const target = initial?.target;
    const index = target?.kind === 'name' ? meaningOf(target, context) : undefined;
    if (index?.kind === 'signal') this.#index = index;
    this.startTurn();
  }

  /** Takes note of the variables before a turn; values that they had before end all unrolling. */
  startTurn(): void {
    const turn = this.#turn++;
    if (turn > 0 && turn <= BLIND_TURNS) return;
    if (turn === BLIND_TURNS + 1) this.#steering = steeringVariables(this.#loop, this.#context);
    if (turn > BLIND_TURNS) this.#compareAll();
    this.#compareIndex();
  }

  /** Looks whether the body, which has just been executed, has left the index alone. */
  endTurn(): void {
    if (this.#turn > 1 && this.#turn <= BLIND_TURNS + 1) return;
    if (this.#valueNow() !== this.#value) this.#index = undefined;
  }

  #compareIndex(): void {
    this.#value = this.#valueNow();
    if (this.#index === undefined || this.#value === undefined) return;
    if (!this.#values.has(this.#value)) {
      this.#values.add(this.#value);
    } else if (decidesAlone(this.#index, this.#loop, this.#context)) {
      this.#report(`${this.#text(this.#index.name)} comes back to ${this.#value}`);
    } else {
      this.#index = undefined;
    }
  }

  #compareAll(): void {
    const steering = this.#steering;
    if (steering === undefined) return;
    if (steering.length === 0) {
      this.#reportUnchanged();
      return;
    }
    const values = numbersIn(steering, this.#context);
    if (values === undefined) this.#steering = undefined;
    else if (!this.#states.has(values)) this.#states.add(values);
    else if (steering.length === 1) {
      this.#report(`${this.#text(steering[0]!.name)} comes back to ${values}`);
    } else {
      const names = listed(steering.map(({ name }) => this.#text(name)));
      this.#abort(
        `${names} come back to values that they had, so that this loop never ends; ${nearer}`,
      );
    }
  }

  #valueNow(): bigint | undefined {
    return this.#index && numberIn(this.#index.nets, this.#context);
  }

  #text(name: NameId): string {
    return `\`${pathText(this.#context.scope.shared, [name])}\``;
  }

  #report(what: string): void {
    this.#abort(`${what} before this loop ends; declare it wider, or as an integer, or ${nearer}`);
  }

  #reportUnchanged(): void {
    const { condition, step } = this.#loop;
    const names = new Set<string>();
    forEachName(condition, (name) => {
      const binding = plainMeaningOf(name, this.#context);
      if (binding?.kind === 'signal') names.add(this.#text(binding.name));
    });
    const target = step?.target;
    const changed =
      target?.kind === 'name' ? `; its step changes ${this.#text(target.path.at(-1)!)}` : '';
    const what = names.size === 0 ? 'its condition' : listed([...names]);
    this.#abort(`this loop never ends, because nothing in it changes ${what}${changed}; ${nearer}`);
  }

  #abort(message: string): void {
    const { scope, store } = this.#context;
    if (store.aborted) return;
    store.aborted = true;
    report(scope.shared, 'loop-unbounded', this.#loop.condition, message);
  }
}

/** Whether nothing but the index tells how a loop goes on. */
function decidesAlone(
  index: SignalBinding,
  { condition, step, body }: Loop,
  context: Context,
): boolean {
  if (step === undefined) return false;
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
