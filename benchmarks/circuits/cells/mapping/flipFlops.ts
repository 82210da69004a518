import { type Cell, cellName } from '../cell.js';
import { cellNamed } from '../library.js';
import type { LogicGraph } from './logicGraph.js';
import type { FlipFlop, LocalNet } from './structure.js';

/** What a pin is connected to, the least significant bit first; nothing where it stays open. */
export type Connection = readonly [pin: string, nets: readonly LocalNet[]];

/** A cell in a module. */
export interface PlacedCell {
  readonly cell: Cell;
  /** Its name in the module; undefined for one that a number names. */
  readonly name: string | undefined;
  readonly pins: readonly Connection[];
}

const readersOfGate = 32;

/**
 * Places the flip-flops of a module one by one, with enables as pins of their cells. Those that
 * power up at 1 without a reset hold the complement, for the cells tell no value at power-up; so
 * they are right where all registers start at 0. Adds the inverters this needs to the logic.
 */
export function placeFlipFlops(graph: LogicGraph, flipFlops: readonly FlipFlop[]): PlacedCell[] {
  const invert = inverter(graph);
  return flipFlops.map((flipFlop) => {
    const { name, clk, d, q, enable, reset, value } = flipFlop;
    const isComplement = reset === undefined && value === 1;
    const family = `flop${enable === undefined ? '' : '_enable'}${controlOf(flipFlop)}`;
    const data = isComplement ? graph.add('not', d) : d;
    return {
      cell: cellNamed(cellName(family, 1)),
      name,
      pins: [
        ['ck', [clk]],
        ['d', [data]],
        ...(enable === undefined ? [] : [['en', [enable]] as const]),
        ...(reset === undefined ? [] : [[controlPin(value), [invert(reset)]] as const]),
        ...(isComplement
          ? ([['qn', [q]]] as const)
          : ([
              ['q', [q]],
              ['qn', []],
            ] as const)),
      ],
    };
  });
}

/**
 * Does the same with clock gates in place of enable pins, one for at most 32 flip-flops of one
 * clock and enable, and with cells of several bits where neighbours differ in nothing but data.
 */
export function placeGatedFlipFlops(
  graph: LogicGraph,
  flipFlops: readonly FlipFlop[],
): PlacedCell[] {
  const cells: PlacedCell[] = [];
  const gated = flipFlops.map((flipFlop) => ({ ...flipFlop }));
  const groups = new Map<string, FlipFlop[]>();
  for (const flipFlop of gated) {
    if (flipFlop.enable === undefined) continue;
    const key = `${flipFlop.clk} ${flipFlop.enable}`;
    groups.set(key, [...(groups.get(key) ?? []), flipFlop]);
  }
  for (const group of groups.values()) {
    for (let first = 0; first < group.length; first += readersOfGate) {
      const gck = graph.net();
      const part = group.slice(first, first + readersOfGate);
      cells.push(clockGate(part[0]!, gck, cells.length));
      for (const flipFlop of part) Object.assign(flipFlop, { clk: gck, enable: undefined });
    }
  }
  return [...cells, ...placeBanks(graph, gated)];
}

function clockGate({ name, clk, enable }: FlipFlop, gck: LocalNet, count: number): PlacedCell {
  const hasTest = count % 2 === 1;
  return {
    cell: cellNamed(hasTest ? cellName('gate_test', 2) : cellName('gate', 4)),
    name: `gate_of_${name}`,
    pins: [
      ['ck', [clk]],
      ['en', [enable!]],
      ...(hasTest ? ([['te', [0]]] as const) : []),
      ['gck', [gck]],
    ],
  };
}

function placeBanks(graph: LogicGraph, flipFlops: readonly FlipFlop[]): PlacedCell[] {
  const invert = inverter(graph);
  const cells: PlacedCell[] = [];
  for (let i = 0; i < flipFlops.length; ) {
    const run = bankAt(flipFlops, i);
    if (run.length === 1) cells.push(...placeFlipFlops(graph, run));
    else cells.push(run.length === 2 ? pair(run) : bank(run, invert(run[0]!.reset!)));
    i += run.length;
  }
  return cells;
}

/** The flip-flops from place `i` on that one cell takes: four with a clear, two without, or one. */
function bankAt(flipFlops: readonly FlipFlop[], i: number): readonly FlipFlop[] {
  const { clk, reset, value } = flipFlops[i]!;
  if (value === 1) return [flipFlops[i]!];
  const run = flipFlops.slice(i, i + (reset === undefined ? 2 : 4));
  const isAlike = (other: FlipFlop) =>
    other.clk === clk && other.reset === reset && other.value === value;
  const isWhole = run.length === (reset === undefined ? 2 : 4);
  return isWhole && run.every(isAlike) ? run : [flipFlops[i]!];
}

function pair(run: readonly FlipFlop[]): PlacedCell {
  const bits = run.flatMap(({ d, q }, i): Connection[] => [
    [`d${i}`, [d]],
    [`q${i}`, [q]],
  ]);
  const pins: Connection[] = [['ck', [run[0]!.clk]], ...bits];
  return { cell: cellNamed(cellName('flop_pair', 1)), name: `pair_of_${run[0]!.name}`, pins };
}

function bank(run: readonly FlipFlop[], clear: LocalNet): PlacedCell {
  const pins: Connection[] = [
    ['q', run.map(({ q }) => q)],
    ['d', run.map(({ d }) => d)],
    ['ck', [run[0]!.clk]],
    ['clr_n', [clear]],
  ];
  return { cell: cellNamed(cellName('flop_bank4', 1)), name: `bank_of_${run[0]!.name}`, pins };
}

function controlOf({ reset, value }: FlipFlop): string {
  if (reset === undefined) return '';
  return value === 1 ? '_preset' : '_clear';
}

const controlPin = (value: 0 | 1): string => (value === 1 ? 'set_n' : 'clr_n');

/** One inverter for each net, however often it is asked for. */
function inverter(graph: LogicGraph): (net: LocalNet) => LocalNet {
  const made = new Map<LocalNet, LocalNet>();
  return (net) => {
    const known = made.get(net) ?? graph.add('not', net);
    made.set(net, known);
    return known;
  };
}
