/** A scalar (`width` 1) or a vector `[width-1:0]` of a module; the text uses its last name. */
export interface Net {
  name: string;
  readonly width: number;
  role: 'input' | 'output' | 'wire' | 'constant';
}

/** One bit of a net; `index` is 0 for a scalar. */
export interface Bit {
  readonly net: Net;
  readonly index: number;
}

/** Bits of any nets, the least significant first. */
export type Bus = readonly Bit[];

/** Gates and flip-flops of a module with everything below it. */
export interface Size {
  readonly gates: number;
  readonly registers: number;
}

/** What can be instantiated: a module or a flip-flop cell. */
export interface Definition {
  readonly name: string;
  readonly ports: readonly Net[];
  /** The definitions it instantiates, each once. */
  parts(): Iterable<Definition>;
  /** Its Verilog text, line by line. */
  lines(): Iterable<string>;
  /** What it holds, with everything below it. */
  size(): Size;
}

/** The constant 0 as a bit. */
export const zero: Bit = { net: { name: "1'b0", width: 1, role: 'constant' }, index: 0 };

/** The constant 1 as a bit. */
export const one: Bit = { net: { name: "1'b1", width: 1, role: 'constant' }, index: 0 };

/** A constant as a bus. */
export function constantBus(value: bigint, width: number): Bus {
  return Array.from({ length: width }, (_, i) => ((value >> BigInt(i)) & 1n ? one : zero));
}

/** All bits of a net. */
export function bitsOf(net: Net): Bus {
  return Array.from({ length: net.width }, (_, index) => ({ net, index }));
}

/** A single bit as a bus of one; a bus stays what it is. */
export function asBus(bits: Bit | Bus): Bus {
  return 'net' in bits ? [bits] : bits;
}

/** Whether the bits are exactly one whole net in its own order. */
export function isWhole(bus: Bus): boolean {
  const net = bus[0]?.net;
  return bus.length === net?.width && bus.every((bit, i) => bit.net === net && bit.index === i);
}

/** A bit as a Verilog primary: `name` or `name[3]`. */
export function bitText({ net, index }: Bit): string {
  return net.width === 1 ? net.name : `${net.name}[${index}]`;
}

/**
 * Bits as a Verilog expression, most significant first: neighbours joined to part selects, a
 * whole vector by its name, nothing but constants as one sized number.
 */
export function busText(bus: Bus): string {
  if (bus.length > 1 && bus.every((bit) => bit.net.role === 'constant')) return constantText(bus);
  const pieces: string[] = [];
  for (let high = bus.length - 1; high >= 0; ) {
    let low = high;
    while (low > 0 && isBelow(bus[low - 1]!, bus[low]!)) low--;
    pieces.push(runText(bus[low]!, high - low + 1));
    high = low - 1;
  }
  return pieces.length === 1 ? pieces[0]! : `{${pieces.join(', ')}}`;
}

function runText(lowest: Bit, length: number): string {
  const { net, index } = lowest;
  if (length === net.width) return net.name;
  return length === 1 ? bitText(lowest) : `${net.name}[${index + length - 1}:${index}]`;
}

function constantText(bus: Bus): string {
  const digits = bus.map((bit) => Number(bit.net === one.net)).reverse();
  return `${bus.length}'h${BigInt(`0b${digits.join('')}`).toString(16)}`;
}

function isBelow(lower: Bit, upper: Bit): boolean {
  return lower.net === upper.net && lower.index + 1 === upper.index;
}
