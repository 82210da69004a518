import {
  FALSE,
  type Literal,
  type Logic,
  LogicOp,
  type LogicState,
  nodeOf,
} from '../../logic/logic.js';
import { mapEffects } from '../../logic/sinks.js';
import type { RowSink, VectorSink } from '../../program/vectorCode.js';
import type { Addition } from '../additions/addition.js';
import { growPacks } from './growPacks.js';
import { LANES, type Packs, type Tuple } from './packs.js';
import { savedPart } from './prices.js';
import { prunePacks } from './prunePacks.js';
import { readersOf } from './readers.js';
import { stackedRows } from './stackedRows.js';
import { breakCircles, type Stages, stagesOf } from './units.js';
import { type PlannedGather, VectorPlan } from './vectorPlan.js';

/**
 * Packing costs calls and waits that are not counted, and single operations are rewritten better
 * where all are single: small circuits that saved less by these prices ran slower.
 */
const LEAST_SAVED = 0.28;

/** A graph of which a part is computed sixteen bits at a time. */
export interface PackedLogic {
  /**
   * The rest of the graph. Lanes of vectors are inputs behind those of the row; what vectors read
   * of it is outputs behind those of the row. The state bits that vectors make stand first, sixteen
   * of each pack, and their `next` is `FALSE`; so are outputs that vectors make.
   */
  readonly scalar: Logic;
  /** Per state bit, 1 if it must be kept as it is. */
  readonly fixedStates: Uint8Array;
  readonly rowInputs: number;
  readonly rowOutputs: number;
  readonly plan: VectorPlan;
  /** Gathers in the order of the outputs behind those of the row, an output for each lane. */
  readonly gathers: readonly PlannedGather[];
  readonly slots: readonly VectorSink[];
  readonly states: readonly VectorSink[];
  readonly outputs: readonly VectorSink[];
  readonly rows: readonly RowSink[];
  /** Per node of `scalar`, the stage that computes it. */
  readonly stageOf: Uint16Array;
  readonly stageCount: number;
}

/**
 * Finds operations that can be made on sixteen bits at a time, with the state bits laid out to suit
 * them, and takes them out of the graph. Undefined where nothing is worth it.
 */
export function packWords(
  logic: Logic,
  additions: readonly Addition[] = [],
): PackedLogic | undefined {
  const packs = bestPacks(logic, additions);
  return packs === undefined ? undefined : new Packing(packs).packed();
}

// Sums decide where everything else stands, so that each set of them is tried from the start.
function bestPacks(logic: Logic, additions: readonly Addition[]): Packs | undefined {
  const without = additions.length === 0 ? undefined : bestPacks(logic, []);
  let standing = additions;
  let packs = grownPacks(logic, standing);
  while (packs.dissolved.size > 0) {
    const { dissolved } = packs;
    standing = standing.filter((addition) => !dissolved.has(addition));
    if (standing.length === 0) return without;
    packs = grownPacks(logic, standing);
  }
  const saved = savedPart(packs);
  if (saved < LEAST_SAVED) return without;
  return without !== undefined && savedPart(without) >= saved ? without : packs;
}

function grownPacks(logic: Logic, additions: readonly Addition[]): Packs {
  const packs = growPacks(logic, additions);
  prunePacks(packs);
  breakCircles(packs);
  prunePacks(packs);
  return packs;
}

class Packing {
  readonly #packs: Packs;
  readonly #logic: Logic;
  readonly #stages: Stages;
  readonly #plan: VectorPlan;
  /** Old state bit at each new place, -1 where none is. */
  readonly #placement: number[] = [];
  readonly #placeOfPack = new Map<number, number>();
  readonly #slotOf = new Map<number, number>();
  #stageCount: number;

  constructor(packs: Packs) {
    this.#packs = packs;
    this.#logic = packs.logic;
    this.#stages = stagesOf(packs);
    this.#stageCount = this.#stages.count;
    this.#placeStates();
    this.#plan = new VectorPlan(packs, this.#stages, this.#placeOfPack);
  }

  packed(): PackedLogic {
    const plan = this.#plan;
    for (const pack of this.#stages.packOrder) plan.ofPack(pack);
    const slots = this.#slots();
    const states = this.#stateSinks();
    const rows = stackedRows(this.#packs, plan);
    const shown = new Uint8Array(this.#logic.outputs.length);
    for (const { to, words } of rows) {
      for (const word of words) shown.fill(1, 8 * to + 32 * word, 8 * to + 32 * (word + 1));
    }
    const outputs = this.#outputSinks(shown);
    for (const { to } of outputs) shown.fill(1, to, to + LANES);
    const { scalar, fixedStates } = this.#scalar(states, shown);
    return {
      scalar,
      fixedStates,
      rowInputs: this.#logic.inputCount,
      rowOutputs: this.#logic.outputs.length,
      plan,
      gathers: plan.gathers,
      slots,
      states,
      outputs,
      rows,
      stageOf: this.#latestStages(scalar),
      stageCount: this.#stageCount,
    };
  }

  // Bits of packs stand first; of the others those that are outputs stand first.
  #placeStates(): void {
    const { states, a, outputs, op } = this.#logic;
    const isPlaced = new Uint8Array(states.length);
    for (const [number, pack] of this.#packs.standing()) {
      if (pack.op !== LogicOp.State) continue;
      this.#placeOfPack.set(number, this.#placement.length);
      for (const node of pack.nodes) {
        this.#placement.push(node < 0 ? -1 : a[node]!);
        if (node >= 0) isPlaced[a[node]!] = 1;
      }
    }
    const shown = outputs.map(nodeOf).filter((node) => op[node] === LogicOp.State);
    for (const bit of [...shown.map((node) => a[node]!), ...states.keys()]) {
      if (isPlaced[bit] === 1) continue;
      this.#placement.push(bit);
      isPlaced[bit] = 1;
    }
  }

  // Packs whose lanes are read one by one keep them in slots.
  #slots(): VectorSink[] {
    const readers = readersOf(this.#packs);
    const { nodeCount, states } = this.#logic;
    const packedState = this.#packedStates();
    const isSingle = (by: number): boolean =>
      by < nodeCount
        ? !this.#packs.isPacked(by)
        : by < nodeCount + states.length
          ? packedState[by - nodeCount] === 0
          : true;
    const sinks: VectorSink[] = [];
    const slotOfStep = new Map<number, number>();
    for (const number of this.#stages.packOrder) {
      const pack = this.#packs.get(number)!;
      if (pack.op === LogicOp.State) continue;
      const isRead = pack.nodes.some((node) => node >= 0 && readers.of(node).some(isSingle));
      if (!isRead) continue;
      // Packs whose lanes are different ones of one vector have one slot.
      const { step } = this.#plan.ofPack(number);
      const known = slotOfStep.get(step);
      const slot = known ?? this.#plan.newSlot();
      this.#slotOf.set(number, slot);
      // Scalar code that reads a lane, if only to pass it on inverted, stands in a later stage.
      this.#stageCount = Math.max(this.#stageCount, this.#stages.ofPack[number]! + 2);
      if (known !== undefined) continue;
      slotOfStep.set(step, slot);
      sinks.push({ step, invert: false, to: slot });
    }
    return sinks;
  }

  #packedStates(): Uint8Array {
    const packed = new Uint8Array(this.#logic.states.length);
    for (const [, pack] of this.#packs.standing()) {
      if (pack.op !== LogicOp.State) continue;
      for (const node of pack.nodes) if (node >= 0) packed[this.#logic.a[node]!] = 1;
    }
    return packed;
  }

  #stateSinks(): VectorSink[] {
    const sinks: VectorSink[] = [];
    for (const [number, to] of this.#placeOfPack) {
      const tuple = this.#packs.get(number)!.operands[0]!;
      if (!this.#plan.needsVectors(tuple)) continue;
      const { step, inverted } = this.#plan.together(tuple);
      sinks.push({ step, invert: inverted, to });
    }
    return sinks;
  }

  // Sixteen outputs at a time, except those that are made already.
  #outputSinks(shown: Uint8Array): VectorSink[] {
    const { outputs } = this.#logic;
    const sinks: VectorSink[] = [];
    for (let first = 0; first < outputs.length; first += LANES) {
      if (shown[first] === 1) continue;
      const group = outputs.slice(first, first + LANES);
      const tuple: Tuple = [...group, ...new Array<number>(LANES - group.length).fill(-1)];
      if (!this.#plan.needsVectors(tuple)) continue;
      const { step, inverted } = this.#plan.together(tuple);
      sinks.push({ step, invert: inverted, to: first });
    }
    return sinks;
  }

  #scalar(
    stateSinks: readonly VectorSink[],
    shown: Uint8Array,
  ): { scalar: Logic; fixedStates: Uint8Array } {
    const logic = this.#logic;
    const moved = this.#mover();
    const op = logic.op.slice();
    const [a, b, c] = [logic.a.slice(), logic.b.slice(), logic.c.slice()];
    const placeOf = new Uint32Array(logic.states.length);
    for (const [place, bit] of this.#placement.entries()) if (bit >= 0) placeOf[bit] = place;
    for (let node = 1; node < logic.nodeCount; node++) {
      if (op[node] === LogicOp.State) a[node] = placeOf[a[node]!]!;
      if (op[node]! < LogicOp.And) continue;
      if (this.#packs.isDead[node] === 1) {
        // No node may be read that stands for something else now.
        op[node] = LogicOp.Input;
        a[node] = 0;
        continue;
      }
      if (this.#packs.isPacked(node)) {
        op[node] = LogicOp.Input;
        a[node] = logic.inputCount + this.#laneAddress(node);
        continue;
      }
      a[node] = moved(a[node]!);
      b[node] = moved(b[node]!);
      if (op[node] === LogicOp.Mux) c[node] = moved(c[node]!);
    }
    const byVector = new Uint8Array(this.#placement.length);
    for (const { to } of stateSinks) byVector.fill(1, to, to + LANES);
    const unused: LogicState = { role: 'unused', index: 0 };
    const gathered = this.#plan.gathers.flatMap(({ literals }) =>
      literals.map((literal) => (literal < 0 ? FALSE : moved(literal))),
    );
    const scalar: Logic = {
      ...logic,
      op,
      a,
      b,
      c,
      inputCount: logic.inputCount + this.#plan.slotCount * LANES,
      outputs: [
        ...logic.outputs.map((literal, i) => (shown[i] === 1 ? FALSE : moved(literal))),
        ...gathered,
      ],
      next: this.#placement.map((bit, place) =>
        bit < 0 || byVector[place] === 1 ? FALSE : moved(logic.next[bit]!),
      ),
      states: this.#placement.map((bit) => logic.states[bit] ?? unused),
      ...mapEffects(logic, moved),
    };
    return { scalar, fixedStates: this.#fixedStates(scalar) };
  }

  // What vectors read or write is kept as it is.
  #fixedStates(scalar: Logic): Uint8Array {
    const fixed = new Uint8Array(scalar.states.length);
    for (const place of this.#placeOfPack.values()) fixed.fill(1, place, place + LANES);
    for (const source of this.#plan.splats.values()) {
      if (!('literal' in source)) continue;
      const node = nodeOf(source.literal);
      if (scalar.op[node] === LogicOp.State) fixed[scalar.a[node]!] = 1;
    }
    return fixed;
  }

  // A lane that is kept inverted is read the other way round.
  #mover(): (literal: Literal) => Literal {
    const { packOf } = this.#packs;
    return (literal) => {
      const pack = packOf[nodeOf(literal)]!;
      return pack >= 0 && this.#plan.ofPack(pack).inverted ? literal ^ 1 : literal;
    };
  }

  // Lanes that nobody reads one by one have no slot: any address will do.
  #laneAddress(node: number): number {
    const slot = this.#slotOf.get(this.#packs.packOf[node]!) ?? 0;
    return slot * LANES + this.#packs.laneOf[node]!;
  }

  // Each operation as late as its readers allow, so that few values are held over a stage.
  #latestStages({ op, a, b, c, nodeCount }: Logic): Uint16Array {
    const latest = new Uint16Array(nodeCount).fill(this.#stageCount - 1);
    const lower = (literal: Literal, stage: number): void => {
      const node = nodeOf(literal);
      if (latest[node]! > stage) latest[node] = stage;
    };
    for (const { literals, stage } of this.#plan.gathers) {
      for (const literal of literals) if (literal >= 0) lower(literal, stage);
    }
    for (let node = nodeCount - 1; node > 0; node--) {
      if (op[node]! < LogicOp.And) continue;
      lower(a[node]!, latest[node]!);
      lower(b[node]!, latest[node]!);
      if (op[node] === LogicOp.Mux) lower(c[node]!, latest[node]!);
    }
    return latest;
  }
}
