import type { GateKind, Module } from './netlistWriter.js';
import type { Bit, Bus } from './nets.js';

const fanIn = 4;

/** Joins any number of bits by a balanced tree of gates with at most four inputs each. */
export function tree(m: Module, kind: 'and' | 'or' | 'xor', bits: Bus): Bit {
  let level = bits;
  while (level.length > 1) {
    const next: Bit[] = [];
    for (let i = 0; i < level.length; i += fanIn) {
      const group = level.slice(i, i + fanIn);
      next.push(group.length === 1 ? group[0]! : m.gate(kind, group));
    }
    level = next;
  }
  if (level.length === 0) throw new RangeError(`expected at least one bit to ${kind}, got none`);
  return level[0]!;
}

/** Joins two buses of one width bit by bit. */
export function zip(m: Module, kind: GateKind, left: Bus, right: Bus): Bus {
  return left.map((bit, i) => m.gate(kind, [bit, right[i]!]));
}

/** Joins every bit of a bus with one bit. */
export function zipWith(m: Module, kind: GateKind, bus: Bus, bit: Bit): Bus {
  return bus.map((each) => m.gate(kind, [each, bit]));
}

/** Inverts every bit. */
export function invert(m: Module, bus: Bus): Bus {
  return bus.map((bit) => m.not(bit));
}

/** Chooses `whenOne` where `select` is 1 and `whenZero` where it is 0. */
export function mux(m: Module, select: Bit, whenZero: Bus, whenOne: Bus): Bus {
  const unselect = m.not(select);
  return whenZero.map((bit, i) => m.nand(m.nand(bit, unselect), m.nand(whenOne[i]!, select)));
}

/** Chooses between a bus and a constant: `constant` where `select` is 1. */
export function muxConstant(m: Module, select: Bit, bus: Bus, constant: bigint): Bus {
  const isOne = bus.map((_, i) => ((constant >> BigInt(i)) & 1n) === 1n);
  if (isOne.every(Boolean)) return zipWith(m, 'or', bus, select);
  const unselect = m.not(select);
  return bus.map((bit, i) => (isOne[i] ? m.or(bit, select) : m.and(bit, unselect)));
}

/** Is 1 where the bus holds the constant. */
export function equals(m: Module, bus: Bus, constant: number): Bit {
  const ones = bus.filter((_, i) => (constant >>> i) & 1);
  const zeros = bus.filter((_, i) => !((constant >>> i) & 1));
  const noOthers = zeros.length > 0 ? [m.not(tree(m, 'or', zeros))] : [];
  return tree(m, 'and', [...ones, ...noOthers]);
}

/** Adds any number of buses modulo 2^width, by carry-save columns that ripple upwards. */
export function add(m: Module, width: number, ...operands: Bus[]): Bus {
  const columns = Array.from({ length: width + 1 }, (_, i) => operands.flatMap((o) => o[i] ?? []));
  return columns.slice(0, width).map((column, i) => {
    if (i === width - 1) return tree(m, 'xor', column);
    const carries = columns[i + 1]!;
    const queue = [...column];
    while (queue.length > 1) {
      const [a, b, c] = queue.splice(0, 3);
      const half = m.xor(a!, b!);
      const generate = m.and(a!, b!);
      if (c === undefined) {
        queue.push(half);
        carries.push(generate);
      } else {
        queue.push(m.xor(half, c));
        carries.push(m.or(generate, m.and(half, c)));
      }
    }
    return queue[0]!;
  });
}

/** Adds 1, where `carry` is given only while that is 1, modulo 2^width. */
export function increment(m: Module, bus: Bus, carry?: Bit): Bus {
  let chain = carry;
  return bus.map((bit, i) => {
    const below = chain;
    if (i < bus.length - 1) chain = below ? m.and(below, bit) : bit;
    return below ? m.xor(bit, below) : m.not(bit);
  });
}

/** Subtracts 1, modulo 2^width. */
export function decrement(m: Module, bus: Bus): Bus {
  let anyBelow: Bit | undefined;
  return bus.map((bit, i) => {
    const below = anyBelow;
    if (i < bus.length - 1) anyBelow = below ? m.or(below, bit) : bit;
    return below ? m.xnor(bit, below) : m.not(bit);
  });
}
