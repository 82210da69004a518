import type { NetId } from '../../../circuit/ids.js';
import type { LatchPins } from '../../../circuit/pinTable.js';
import type { Statement } from '../syntax.js';
import { asyncPins, type ControlNet } from './asyncPins.js';
import type { Context } from './context.js';
import { netsNamed } from './namedNets.js';
import { freshRun } from './process.js';
import type { Changes } from './store.js';
import { walk } from './walk.js';

/** A process that tests more signals than these describes no latch with set and reset. */
const MOST_TESTED = 8;

/**
 * Finds the sets and resets of the latches of one process: signals tested in it which at one level,
 * while those of higher priority are not active, give the latch a constant whatever all else is. So
 * the body is executed with a signal held at a level, as it is for registers.
 */
export class LatchControlSearch {
  readonly #body: Statement;
  readonly #context: Context;
  readonly #tested: readonly ControlNet[];
  readonly #runs = new Map<string, Changes>();

  constructor(body: Statement, context: Context) {
    this.#body = body;
    this.#context = context;
    const nets = testedNets(body, context);
    this.#tested =
      nets.length > MOST_TESTED
        ? []
        : nets.flatMap((net) => [{ net, level: 1 } as const, { net, level: 0 } as const]);
  }

  /** Undefined for a latch without set and reset. */
  pinsOf(key: NetId): Omit<LatchPins, 'output'> | undefined {
    const { logic } = this.#context;
    const controls: ControlNet[] = [];
    const values: (0 | 1)[] = [];
    const idle: ControlNet[] = [];
    for (let next = this.#next(key, idle); next !== undefined; next = this.#next(key, idle)) {
      controls.push(next.control);
      values.push(next.value);
      const { net, level } = next.control;
      idle.push({ net, level: level === 1 ? 0 : 1 });
    }
    if (controls.length === 0) return undefined;
    const rest = this.#run(idle).get(key);
    const enable = rest === undefined ? logic.zero : rest.assigned;
    // Without a state of its own it is no latch.
    if (logic.valueOf(enable) === 1) return undefined;
    // What only ever takes one value on is said to be enabled: its control may be a clock.
    if (logic.valueOf(enable) === 0 && new Set(values).size === 1) return undefined;
    const { set, reset, priority } = asyncPins(values, controls, logic);
    return {
      priority,
      ...(logic.valueOf(set) !== 0 && { set }),
      ...(logic.valueOf(reset) !== 0 && { reset }),
      ...(rest !== undefined && logic.valueOf(enable) !== 0 && { enable, data: rest.value }),
    };
  }

  /** The control of highest priority beside those that are idle. */
  #next(key: NetId, idle: readonly ControlNet[]) {
    for (const control of this.#tested) {
      if (idle.some(({ net }) => net === control.net)) continue;
      const value = this.#constant(key, [...idle, control]);
      if (value !== undefined) return { control, value };
    }
    return undefined;
  }

  #constant(key: NetId, held: readonly ControlNet[]): 0 | 1 | undefined {
    const { logic } = this.#context;
    const entry = this.#run(held).get(key);
    if (entry === undefined || logic.valueOf(entry.assigned) !== 1) return undefined;
    const value = logic.valueOf(entry.value);
    return value === 0 || value === 1 ? value : undefined;
  }

  #run(held: readonly ControlNet[]): Changes {
    const id = held.map(({ net, level }) => `${net} ${level}`).join();
    const known = this.#runs.get(id);
    if (known !== undefined) return known;
    const { logic, store } = this.#context;
    const fixed = new Map(held.map(({ net, level }) => [net, logic.constant(level)]));
    const outside = (net: NetId): NetId => fixed.get(net) ?? net;
    const run = freshRun(this.#context, { outside, places: store.places });
    run.services.execute(this.#body, run);
    const changes = run.store.finish();
    this.#runs.set(id, changes);
    return changes;
  }
}

/** The bits of signals that conditions name. */
function testedNets(body: Statement, context: Context): NetId[] {
  const tests: unknown[] = [];
  walk(body, (node) => {
    const isTest = node.kind === 'if' || node.kind === 'conditional';
    if (isTest && 'condition' in node) tests.push(node.condition);
    return true;
  });
  return [...netsNamed(tests, context)];
}
