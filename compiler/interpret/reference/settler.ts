import type { Circuit } from '../../circuit/circuit.js';
import { GateKind, isGate } from '../../circuit/gates.js';
import { loopsOf, roundLimit } from '../../circuit/loops.js';
import { ActiveTables } from '../../circuit/tables/activeTables.js';
import { X } from '../../circuit/values.js';
import { type Dependencies, dependenciesOf } from './dependencies.js';
import { Evaluator } from './evaluate.js';
import { type EvaluationOrder, evaluationOrder } from './evaluationOrder.js';
import { ReferenceMemories } from './memories.js';
import { merge } from './values.js';

/** Thrown where nets go on changing in a loop of a two-valued circuit. */
export class UnsettledLoop extends Error {
  /** The nets that still change, in net order. */
  readonly nets: readonly number[];

  constructor(nets: readonly number[]) {
    super(`${nets.length} nets do not settle`);
    this.name = 'UnsettledLoop';
    this.nets = nets;
  }
}

// Unequal to every entry of `EvaluationOrder.loopOf`, -1 included.
const NO_LOOP = -2;

/**
 * The values of all nets, and the work list that makes them follow a change.
 *
 * Nets are evaluated level by level, each at most once in a settling, so that no glitch reaches a
 * latch or an asynchronous pin. Nets of a loop are evaluated together when their level comes, in
 * the order of the loop, round after round until nothing changes.
 */
export class Settler {
  /** Per net: 0, 1 or 2. Change it through `set` only. */
  readonly value: Uint8Array;
  readonly dependencies: Dependencies;
  readonly evaluator: Evaluator;
  readonly memories: ReferenceMemories;
  readonly tables: ActiveTables;
  /** What a constant x reads as. */
  readonly unknown: number;
  readonly #circuit: Circuit;
  readonly #order: EvaluationOrder;
  readonly #threeValued: boolean;
  readonly #queued: Uint8Array;
  /** Scheduled nets of each level, from `#levelStart[level]` on. */
  readonly #agenda: Uint32Array;
  readonly #levelStart: Uint32Array;
  readonly #levelFill: Uint32Array;
  #scheduled = 0;
  #lowest = 0;
  #activeLoop = NO_LOOP;
  /** Value before the present period, for nets that changed in it. */
  readonly #before: Uint8Array;
  readonly #changedIn: Float64Array;
  #period = 1;
  readonly #movedClocks: number[] = [];
  readonly #clockMoved: Uint8Array;

  constructor(circuit: Circuit, threeValued: boolean) {
    const { netCount } = circuit;
    this.#circuit = circuit;
    this.#threeValued = threeValued;
    this.value = new Uint8Array(netCount);
    this.tables = new ActiveTables(circuit, threeValued);
    this.unknown = threeValued ? X : 0;
    this.dependencies = dependenciesOf(circuit, this.tables);
    this.memories = new ReferenceMemories(circuit, threeValued, this.value);
    this.evaluator = new Evaluator(
      circuit,
      this.dependencies.elementOf,
      this.value,
      this.unknown,
      this.memories,
      this.tables,
    );
    const place = new Uint32Array(netCount);
    for (const nets of loopsOf(circuit).nets)
      nets.forEach((net, i) => {
        place[net] = i;
      });
    this.#order = evaluationOrder(netCount, this.dependencies, place);
    this.#queued = new Uint8Array(netCount);
    this.#agenda = new Uint32Array(netCount);
    this.#levelStart = startsOf(this.#order);
    this.#levelFill = new Uint32Array(this.#order.levels);
    this.#before = new Uint8Array(netCount);
    this.#changedIn = new Float64Array(netCount);
    this.#clockMoved = new Uint8Array(netCount);
  }

  /** Forgets all values and schedules every net. Gates start at 0, or at x if three-valued. */
  restart(): void {
    this.value.fill(this.#threeValued ? X : 0);
    this.#queued.fill(0);
    this.#levelFill.fill(0);
    this.#scheduled = 0;
    this.#activeLoop = NO_LOOP;
    for (let net = 0; net < this.#circuit.netCount; net++) {
      if (this.#circuit.kind[net] !== GateKind.Input) this.#schedule(net);
    }
    this.startPeriod();
    this.takeMovedClocks();
  }

  /** From now on `valueBefore` looks back to the present values. */
  startPeriod(): void {
    this.#period++;
  }

  /** A net's value when the present period started. */
  valueBefore(net: number): number {
    return this.#changedIn[net] === this.#period ? this.#before[net]! : this.value[net]!;
  }

  /** The clock pins' nets that were set to another value since the last call. */
  takeMovedClocks(): number[] {
    const moved = this.#movedClocks.splice(0);
    for (const net of moved) this.#clockMoved[net] = 0;
    return moved;
  }

  /** Gives a net a value and schedules what depends on it. */
  set(net: number, value: number): void {
    const old = this.value[net]!;
    if (old === value) return;
    if (this.#changedIn[net] !== this.#period) {
      this.#changedIn[net] = this.#period;
      this.#before[net] = old;
    }
    this.value[net] = value;
    const { readerStart, reader, clockedStart } = this.dependencies;
    if (clockedStart[net]! < clockedStart[net + 1]! && !this.#clockMoved[net]) {
      this.#clockMoved[net] = 1;
      this.#movedClocks.push(net);
    }
    for (let i = readerStart[net]!; i < readerStart[net + 1]!; i++) this.#schedule(reader[i]!);
  }

  /** Schedules all that reads a memory, whose contents have changed. */
  touchMemory(memory: number): void {
    for (const net of this.memories.netsOf(memory)) this.#schedule(net);
  }

  /** Evaluates what is scheduled until nothing is. Throws `UnsettledLoop`. */
  settle(): void {
    for (let level = this.#lowest; this.#scheduled > 0; level++) {
      const start = this.#levelStart[level]!;
      const count = this.#levelFill[level]!;
      for (let i = start; i < start + count; i++) {
        const net = this.#agenda[i]!;
        const loop = this.#order.loopOf[net]!;
        if (loop >= 0) {
          // The first of a loop's nets settles all of them.
          if (this.#queued[net]) this.#settleLoop(loop);
        } else {
          this.#queued[net] = 0;
          this.set(net, this.evaluator.evaluate(net));
        }
      }
      this.#levelFill[level] = 0;
      this.#scheduled -= count;
    }
    this.#lowest = this.#order.levels;
  }

  #schedule(net: number): void {
    if (this.#queued[net]) return;
    this.#queued[net] = 1;
    if (this.#order.loopOf[net] === this.#activeLoop) return;
    const level = this.#order.level[net]!;
    this.#agenda[this.#levelStart[level]! + this.#levelFill[level]!++] = net;
    this.#scheduled++;
    if (level < this.#lowest) this.#lowest = level;
  }

  #settleLoop(loop: number): void {
    const { loopStart, loopNets } = this.#order;
    const nets = loopNets.subarray(loopStart[loop]!, loopStart[loop + 1]!);
    const before = Array.from(nets, (net) => this.value[net]!);
    this.#activeLoop = loop;
    if (!this.#runRounds(nets, roundLimit(nets.length))) {
      if (!this.#threeValued) this.#refuse(nets);
      this.#settleTernary(nets, before);
    }
    this.#activeLoop = NO_LOOP;
  }

  /**
   * E. B. Eichelberger, "Hazard detection in combinational and sequential switching circuits", IBM
   * J. Res. Dev. 9(2), 1965, from the values before: what the loop remembers becomes x where it can
   * change, and x spreads; then what the other nets decide leaves x. Both are monotone and so come to an end.
   */
  #settleTernary(nets: Uint32Array, before: readonly number[]): void {
    nets.forEach((net, i) => {
      this.set(net, before[i]!);
    });
    for (const net of nets) this.#queued[net] = 1;
    const remembers = new Set(loopsOf(this.#circuit).keptNets);
    this.#runRounds(nets, Number.POSITIVE_INFINITY, (old, value, net) =>
      remembers.has(net) || !isGate(this.#circuit.kind[net]!) ? merge(old, value) : value,
    );
    for (const net of nets) this.#queued[net] = 1;
    this.#runRounds(nets, Number.POSITIVE_INFINITY);
  }

  /** Evaluates what is queued in the loop's order, round after round; whether it settled within `limit`. */
  #runRounds(
    nets: Uint32Array,
    limit: number,
    combine: (old: number, computed: number, net: number) => number = computed,
  ): boolean {
    for (let round = 0; round < limit; round++) {
      let changed = false;
      for (const net of nets) {
        if (!this.#queued[net]) continue;
        this.#queued[net] = 0;
        const old = this.value[net]!;
        this.set(net, combine(old, this.evaluator.evaluate(net), net));
        if (this.value[net] !== old) changed = true;
      }
      if (!changed) return true;
    }
    return false;
  }

  /** Watches some rounds more to tell which nets change, and throws. */
  #refuse(nets: Uint32Array): never {
    const changing = new Set<number>();
    for (let round = 0; round < 4; round++) {
      for (const net of nets) {
        const value = this.evaluator.evaluate(net);
        if (value !== this.value[net]) changing.add(net);
        this.set(net, value);
      }
    }
    throw new UnsettledLoop(Array.from(changing).sort((a, b) => a - b));
  }
}

const computed = (_old: number, value: number): number => value;

function startsOf({ level, levels }: EvaluationOrder): Uint32Array {
  const start = new Uint32Array(levels + 1);
  for (const own of level) start[own + 1]!++;
  for (let l = 0; l < levels; l++) start[l + 1]! += start[l]!;
  return start;
}
