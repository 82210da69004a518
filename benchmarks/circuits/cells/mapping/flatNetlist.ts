import { cellName } from '../cell.js';
import { ClockTree, readersOfLeaf, type TreeCell } from './clockTree.js';
import type { FlatDesign, FlatNet, Place } from './flatDesign.js';
import type { PlacedCell } from './flipFlops.js';
import { escaped, FlatNames } from './names.js';

/** How the netlist is made. */
export interface MappingOptions {
  /** Puts a tree of buffers at the clock, clock gates at enables, and joins flip-flops in banks. */
  readonly hasClockTree: boolean;
  /** Connects the power pins of every cell. */
  readonly hasPowerPins: boolean;
}

const cellsPerFill = 25;
const cellsPerTap = 200;
const wiresPerLine = 8;

/** Writes a flat design as a layout flow would: one module of cells with named connections. */
export class FlatNetlist {
  readonly #design: FlatDesign;
  readonly #names: FlatNames;
  readonly #options: MappingOptions;
  readonly #trees: ReadonlyMap<FlatNet, ClockTree>;
  #cells = 0;
  #usesTie = [false, false];

  constructor(design: FlatDesign, options: MappingOptions) {
    this.#design = design;
    this.#names = new FlatNames(design);
    this.#options = options;
    this.#trees = options.hasClockTree ? this.#clockTrees() : new Map();
  }

  /** The text, line by line. */
  *lines(): Generator<string> {
    const { structure } = this.#design.top;
    yield `module ${structure.name} (${structure.ports.map(({ name }) => name).join(', ')});`;
    for (const { name, role, nets } of structure.ports) {
      yield `  ${role} ${nets.length === 1 ? '' : `[${nets.length - 1}:0] `}${name};`;
    }
    if (this.#options.hasPowerPins) yield '  supply1 vdd;\n  supply0 vss;';
    yield* this.#wires();
    for (const tree of this.#trees.values()) {
      for (const cell of tree.cells) yield this.#treeCell(cell);
    }
    for (const place of this.#design.places) {
      for (const cell of place.template.cells) yield* this.#cell(place, cell);
    }
    yield* this.#doubledOutputs();
    yield* this.#tieCells();
    yield 'endmodule\n';
  }

  *#wires(): Generator<string> {
    let names: string[] = [];
    for (const name of this.#wireNames()) {
      if (names.push(name) < wiresPerLine) continue;
      yield `  wire ${names.join(', ')};`;
      names = [];
    }
    if (names.length > 0) yield `  wire ${names.join(', ')};`;
  }

  *#wireNames(): Generator<string> {
    yield 'tied_low';
    yield 'tied_high';
    for (const { cells } of this.#trees.values()) {
      for (const { pins } of cells) yield pins[1]![1];
    }
    const isUsed = new Uint8Array(this.#design.netCount);
    for (const place of this.#design.places) {
      for (const { pins } of place.template.cells) {
        for (const [, nets] of pins)
          for (const net of nets) isUsed[this.#design.net(place, net)] = 1;
      }
    }
    for (let net = 2; net < isUsed.length; net++) {
      if (isUsed[net] === 1 && !this.#names.isPort(net)) yield this.#names.net(net);
    }
  }

  *#cell(place: Place, { cell, name, pins }: PlacedCell): Generator<string> {
    const number = this.#cells++;
    const text = name === undefined ? `g${number}` : escaped(`${place.path}${name}`);
    let antenna = '';
    const connections = pins.map(([pin, nets]): readonly [string, string] => {
      const names = nets.map((net) => this.#reader(this.#design.net(place, net), pin));
      if (pin === 'a') antenna = names[0]!;
      return [pin, names.length < 2 ? (names[0] ?? '') : `{${names.toReversed().join(', ')}}`];
    });
    // An output that nothing reads is left out, or written without a net.
    const written = connections.filter(([, net]) => net !== '' || number % 2 === 0);
    yield this.#instance(cell.name, text, written);
    if (number % cellsPerFill === 0)
      yield this.#physical('fill', [1, 2, 4, 8][(number / cellsPerFill) % 4]!);
    if (number % cellsPerTap === 0) yield* this.#tapAndDiode(number, antenna);
  }

  *#tapAndDiode(number: number, net: string): Generator<string> {
    yield `  (* keep *) ${this.#physical('tap', 1).trimStart()}`;
    yield this.#physical('decap', number % (2 * cellsPerTap) === 0 ? 4 : 8);
    if (net !== '') yield this.#instance(cellName('antenna', 1), `diode_${number}`, [['a', net]]);
  }

  /** The name of the net that a pin is connected to; a clock pin hangs on a leaf of the tree. */
  #reader(net: FlatNet, pin: string): string {
    if (net < 2) this.#usesTie[net] = true;
    const tree = pin === 'ck' ? this.#trees.get(net) : undefined;
    return tree === undefined ? this.#names.net(net) : tree.next();
  }

  #treeCell({ cell, name, pins }: TreeCell): string {
    return `  (* dont_touch = "true" *) ${this.#instance(cell.name, name, pins).trimStart()}`;
  }

  #physical(family: string, drive: number): string {
    return this.#instance(cellName(family, drive), `${family}_${this.#cells}`, []);
  }

  #instance(
    cell: string,
    name: string,
    connections: readonly (readonly [pin: string, net: string])[],
  ): string {
    const power = this.#options.hasPowerPins
      ? ([
          ['vdd', 'vdd'],
          ['vss', 'vss'],
        ] as const)
      : [];
    const pins = [...connections, ...power].map(([pin, net]) => `.${pin}(${net})`);
    return `  ${cell} ${name.trimEnd()} (${pins.join(', ')});`;
  }

  /** Buffers for bits of output ports whose net has another port or a constant for its name. */
  *#doubledOutputs(): Generator<string> {
    const { ports } = this.#design.top.structure;
    const place = this.#design.places[0]!;
    for (const { name, role, nets } of ports) {
      if (role === 'input') continue;
      for (const [i, local] of nets.entries()) {
        const net = this.#design.net(place, local);
        if (net === local) continue;
        const port = nets.length === 1 ? name : `${name}[${i}]`;
        yield this.#instance(cellName('buffer', 2), `outlet_${local}`, [
          ['a', this.#reader(net, 'a')],
          ['y', port],
        ]);
      }
    }
  }

  *#tieCells(): Generator<string> {
    for (const [value, level] of ['low', 'high'].entries()) {
      if (!this.#usesTie[value]) continue;
      yield this.#instance(cellName(`tie_${level}`, 1), `tie_${level}`, [['y', `tied_${level}`]]);
    }
  }

  /** A tree for each net that many clock pins hang on. */
  #clockTrees(): Map<FlatNet, ClockTree> {
    const readers = new Map<FlatNet, number>();
    for (const place of this.#design.places) {
      for (const { pins } of place.template.cells) {
        for (const [pin, nets] of pins) {
          if (pin !== 'ck') continue;
          const net = this.#design.net(place, nets[0]!);
          readers.set(net, (readers.get(net) ?? 0) + 1);
        }
      }
    }
    const many = [...readers].filter(([, count]) => count > readersOfLeaf);
    return new Map(
      many.map(([net, count], i) => [
        net,
        new ClockTree(`clock_${i}`, this.#names.net(net), count),
      ]),
    );
  }
}

/** Numbers of cells of the library in a flat design, without those for layout alone. */
export function cellCounts(design: FlatDesign): { gates: number; registers: number } {
  const counts = { gates: 0, registers: 0 };
  for (const { template } of design.places) {
    for (const { cell } of template.cells) {
      if (cell.kind === 'flop') counts.registers += cell.bits;
      else counts.gates++;
    }
  }
  return counts;
}
