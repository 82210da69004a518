import { isInverted, type Literal, type Logic, LogicOp, nodeOf } from '../../logic/logic.js';
import { sinksOf } from '../../logic/sinks.js';
import { type Adder, type Adders, NO_OUTPUT } from './adders.js';

/** Who reads the nodes of a graph in which adders make their outputs at one stroke. */
export class Uses {
  readonly logic: Logic;
  readonly adders: Adders;
  /** Per node, 1 if anything needs it. */
  readonly isReached: Uint8Array;
  /** Per node, how many adders read it, and the last of these. */
  readonly adderReads: Uint32Array;
  readonly adderReader: Uint32Array;
  /** Per node, how often others read it, and the last node that does, -1 where that is a sink. */
  readonly singleReads: Uint32Array;
  readonly singleReader: Int32Array;
  /** Adders that make something that is needed. */
  readonly live = new Set<number>();

  constructor(logic: Logic, adders: Adders) {
    this.logic = logic;
    this.adders = adders;
    const { nodeCount } = logic;
    this.isReached = new Uint8Array(nodeCount);
    this.adderReads = new Uint32Array(nodeCount);
    this.adderReader = new Uint32Array(nodeCount);
    this.singleReads = new Uint32Array(nodeCount);
    this.singleReader = new Int32Array(nodeCount).fill(-1);
    const stack: number[] = [];
    for (const literal of sinksOf(logic)) this.#readBy(-1, literal, stack);
    for (let node = stack.pop(); node !== undefined; node = stack.pop()) this.#visit(node, stack);
  }

  #visit(node: number, stack: number[]): void {
    const { op, a, b, c } = this.logic;
    const adder = this.adders.ofNode[node]!;
    if (adder >= 0) {
      if (this.live.has(adder)) return;
      this.live.add(adder);
      for (const leaf of this.adders.list[adder]!.leaves) {
        this.adderReads[leaf >>> 1]!++;
        this.adderReader[leaf >>> 1] = adder;
        this.#reach(leaf >>> 1, stack);
      }
    } else if (op[node]! >= LogicOp.And) {
      this.#readBy(node, a[node]!, stack);
      this.#readBy(node, b[node]!, stack);
      if (op[node] === LogicOp.Mux) this.#readBy(node, c[node]!, stack);
    }
  }

  #readBy(reader: number, literal: Literal, stack: number[]): void {
    const node = nodeOf(literal);
    this.singleReads[node]!++;
    this.singleReader[node] = reader;
    this.#reach(node, stack);
  }

  #reach(node: number, stack: number[]): void {
    if (this.isReached[node] === 1) return;
    this.isReached[node] = 1;
    stack.push(node);
  }
}

/** An output of a network: a literal, or -1 where nothing reads it. */
export interface NetworkOutput {
  readonly column: number;
  readonly literal: Literal;
}

/**
 * Adders joined by their outputs, each of which one of them alone reads, in columns: an output of
 * column i counts 2^i. What goes in, column by column, adds up to what comes out.
 */
export interface Network {
  readonly size: number;
  /** Per column, the literals that come in, constants among them. */
  readonly inputs: Literal[][];
  readonly outputs: NetworkOutput[];
}

/** The networks that the adders in use make, those of few adders left out. */
export function networksOf(uses: Uses, least: number): Network[] {
  const networks: Network[] = [];
  const known = new Map<number, Place>();
  for (const adder of uses.live) {
    if (known.has(adder)) continue;
    const members = joined(uses, adder, known);
    if (members.length >= least) networks.push(networkOf(uses, members, known));
  }
  return networks;
}

/** Where an adder stands in its network, and whether it adds inverted literals. */
interface Place {
  readonly first: number;
  readonly column: number;
  readonly turned: number;
}

// The adders joined to one, by what it reads and what reads it.
function joined(uses: Uses, first: number, known: Map<number, Place>): number[] {
  const members = [first];
  known.set(first, { first, column: 0, turned: 0 });
  const join = (adder: number, place: Place): void => {
    if (known.has(adder)) return;
    known.set(adder, place);
    members.push(adder);
  };
  for (let i = 0; i < members.length; i++) {
    const { column, turned } = known.get(members[i]!)!;
    const adder = uses.adders.list[members[i]!]!;
    for (const { literal, by, up } of readOutputs(uses, members[i]!)) {
      join(by, {
        first,
        column: column + up,
        turned: turned ^ ((literal ^ leafOf(uses, by, literal)) & 1),
      });
    }
    for (const leaf of adder.leaves) {
      const from = uses.adders.ofNode[leaf >>> 1]!;
      if (from < 0) continue;
      const output = readOutputs(uses, from).find(({ literal }) => literal >>> 1 === leaf >>> 1);
      if (output === undefined) continue;
      join(from, {
        first,
        column: column - output.up,
        turned: turned ^ ((output.literal ^ leaf) & 1),
      });
    }
  }
  return members;
}

// The outputs of an adder that one other adder reads, and nothing else.
function readOutputs(uses: Uses, adder: number): { literal: Literal; by: number; up: 0 | 1 }[] {
  const { sum, carry } = uses.adders.list[adder]!;
  return (
    [
      [sum, 0],
      [carry, 1],
    ] as const
  ).flatMap(([literal, up]) => {
    if (literal === NO_OUTPUT) return [];
    const node = literal >>> 1;
    const isOwn = uses.adders.ofNode[node] === adder;
    if (!isOwn || uses.adderReads[node] !== 1 || uses.singleReads[node] !== 0) return [];
    return [{ literal, by: uses.adderReader[node]!, up }];
  });
}

const leafOf = (uses: Uses, adder: number, literal: Literal): Literal =>
  uses.adders.list[adder]!.leaves.find((leaf) => leaf >>> 1 === literal >>> 1)!;

function networkOf(
  uses: Uses,
  members: readonly number[],
  places: ReadonlyMap<number, Place>,
): Network {
  // The first member stands in column 0; there may be more of them than a call takes arguments.
  const lowest = members.reduce((least, member) => Math.min(least, places.get(member)!.column), 0);
  const inputs: Literal[][] = [];
  const outputs: NetworkOutput[] = [];
  const isInner = (from: number, literal: Literal): boolean => {
    const output = readOutputs(uses, from).find((each) => each.literal >>> 1 === literal >>> 1);
    if (output === undefined) return false;
    const [own, other] = [places.get(from)!, places.get(output.by)];
    if (other?.first !== own.first || other.column !== own.column + output.up) return false;
    const leaf = leafOf(uses, output.by, output.literal);
    return ((output.literal ^ own.turned) & 1) === ((leaf ^ other.turned) & 1);
  };
  for (const member of members) {
    const { column, turned } = places.get(member)!;
    const at = column - lowest;
    const adder: Adder = uses.adders.list[member]!;
    for (const leaf of adder.leaves) {
      const from = uses.adders.ofNode[leaf >>> 1]!;
      if (from >= 0 && places.has(from) && isInner(from, leaf)) continue;
      inputs[at] ??= [];
      inputs[at].push(leaf ^ turned);
    }
    for (const [literal, up] of [
      [adder.sum, 0],
      [adder.carry, 1],
    ] as const) {
      if (literal >= 0 && isInner(member, literal)) continue;
      const isRead =
        literal >= 0 &&
        uses.adders.ofNode[literal >>> 1] === member &&
        uses.isReached[literal >>> 1] === 1;
      outputs.push({ column: at + up, literal: isRead ? literal ^ turned : -1 });
    }
  }
  const network = {
    size: members.length,
    inputs: Array.from(inputs, (each) => each ?? []),
    outputs,
  };
  return isMostlyInverted(network) ? inverted(network) : network;
}

function isMostlyInverted({ inputs }: Network): boolean {
  const literals = inputs.flat();
  return literals.filter(isInverted).length * 2 > literals.length;
}

// What holds for the bits holds for their inverses.
const inverted = ({ size, inputs, outputs }: Network): Network => ({
  size,
  inputs: inputs.map((column) => column.map((literal) => literal ^ 1)),
  outputs: outputs.map(({ column, literal }) => ({
    column,
    literal: literal < 0 ? literal : literal ^ 1,
  })),
});
