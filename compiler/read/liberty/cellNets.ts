import { type NetId, netId } from '../../circuit/ids.js';
import type { Recording } from '../verilog/elaborate/recording.js';
import { indexAt, placeOf } from './bitRange.js';
import type { BitRange, LibertyCell, LibertyPin } from './cell.js';

/** Where a function stands: it may mean one bit of each bus, bundle and bank that it names. */
export interface Context {
  /** Place of the bit from the left; undefined for a function of single pins. */
  readonly place: number | undefined;
  /** Declared indices of the bus that the function stands in. */
  readonly range: BitRange | undefined;
}

/** The context of what belongs to no bus, bundle or bank. */
export const scalarContext: Context = { place: undefined, range: undefined };

/** The context of a pin's functions. */
export const contextOf = ({ vector, place }: LibertyPin): Context =>
  vector === undefined ? scalarContext : { place, range: vector.range };

/** A name that stands for one net, or for one of several by its place from the left. */
export interface CellName {
  /** Number of places; undefined for a single net. */
  readonly width: number | undefined;
  readonly range: BitRange | undefined;
  net(place: number): NetId;
}

/** The nets of a cell's pins, and what the names in its functions mean. */
export class CellNets {
  /** The net of each pin; those of the ports come first and in the order of the ports. */
  readonly pins: readonly NetId[];
  /** The nets of all ports, each least significant bit first. */
  readonly boundary: readonly NetId[];
  readonly #cell: LibertyCell;
  readonly #pinNames = new Map<string, CellName>();
  readonly #states = new Map<string, CellName>();
  readonly #nodes = new Map<string, CellName>();

  constructor(cell: LibertyCell, recording: Recording) {
    this.#cell = cell;
    const order = cell.ports.flatMap(({ pins }) => pins);
    const isPort = new Set(order);
    // Bits of an internal bus shall follow one another too, the rightmost first.
    const internal = cell.pins.map((_, index) => cell.pins.length - 1 - index);
    order.push(...internal.filter((index) => !isPort.has(index)));
    const first = recording.declare(order.length);
    const pins = new Array<NetId>(order.length);
    for (const [place, pin] of order.entries()) pins[pin] = netId(first + place);
    this.pins = pins;
    this.boundary = Array.from({ length: isPort.size }, (_, place) => netId(first + place));
    for (const [index, { name }] of cell.pins.entries()) {
      this.#pinNames.set(
        name,
        single(() => pins[index]!),
      );
    }
    for (const { name, pins: bits, range } of cell.vectors) {
      const net = (place: number): NetId => pins[bits[place]!]!;
      this.#pinNames.set(name, { width: bits.length, range, net });
    }
  }

  /** Names a state variable; false if another has the name. */
  addState(name: string, meaning: CellName): boolean {
    if (this.#states.has(name)) return false;
    this.#states.set(name, meaning);
    return true;
  }

  /** Names a column of the state table; pins and state variables of the name come before it. */
  addNode(name: string, net: () => NetId): void {
    this.#nodes.set(name, single(net));
  }

  /** The net that a name means in a context, or why it means none. */
  resolve(name: string, context: Context): NetId | UnknownName {
    // A state variable may have the name of the output that shows it.
    const known =
      this.#states.get(name) ??
      this.#pinNames.get(this.#cell.aliases.get(name) ?? name) ??
      this.#nodes.get(name);
    if (known === undefined) return this.#bankElement(name, context);
    const { width } = known;
    if (width === undefined) return known.net(0);
    const place = context.place ?? (width === 1 ? 0 : -1);
    if (place >= 0 && place < width) return known.net(place);
    const bits = width === 1 ? '1 bit' : `${width} bits`;
    const cure =
      place < 0
        ? `name one of them${known.range === undefined ? '' : `, such as ${name}[${indexAt(known.range, 0)}]`}`
        : `the one at place ${place + 1} from the left is asked for`;
    return { code: 'range-invalid', message: `${name} has ${bits}; ${cure}` };
  }

  /** `IQ[2]` in a function of bus Q means what stands at the place of Q[2]. */
  #bankElement(name: string, { range }: Context): NetId | UnknownName {
    const match = /^(.+)\[(\d{1,9})\]$/.exec(name);
    const bank = this.#states.get(match?.[1] ?? '');
    if (range !== undefined && bank?.width !== undefined) {
      const place = placeOf(range, Number(match?.[2]));
      if (place >= 0 && place < bank.width) return bank.net(place);
    }
    const message = `${name} is no pin or state of cell ${this.#cell.name}`;
    return { code: 'name-undeclared', message };
  }
}

/** Why a name means no net. */
export interface UnknownName {
  readonly code: 'name-undeclared' | 'range-invalid';
  readonly message: string;
}

const single = (net: () => NetId): CellName => ({ width: undefined, range: undefined, net });
