import type { NetId } from '../../circuit/ids.js';
import { eventsOfFunction } from '../../circuit/tables/tableEvents.js';
import { listed } from '../listed.js';
import { lowerSequential } from '../verilog/elaborate/sequentialPrimitive.js';
import { MODEL_CURE } from './buildState.js';
import type { LibertyStateTable } from './cell.js';
import { type CellBuild, placeIn } from './cellBuild.js';
import { scalarContext } from './cellNets.js';
import { columnsOf, NodeTable } from './nodeTable.js';
import { parseStateTable, type StateRow } from './stateTable.js';
import type { LibertyText } from './syntax.js';
import { wordsOf } from './words.js';

/** Tables are worked out for every combination of what a node depends on. */
const MAX_INPUTS = 10;

/** The state table of a cell: each node is built when a pin or function first asks for it. */
export class StateTableBuild {
  readonly #build: CellBuild;
  readonly #table: LibertyStateTable;
  readonly #nodes: (NetId | undefined)[] = [];
  #rows: readonly StateRow[] | undefined;

  constructor(build: CellBuild, table: LibertyStateTable) {
    this.#build = build;
    this.#table = table;
    this.#rows = this.#parsed();
    for (const [index, name] of table.nodes.entries()) {
      build.nets.addNode(name, () => this.#shared(index));
    }
  }

  /**
   * The net of the node that an `internal_node` names. With an `input_map` the pin has a copy of
   * the table to itself, whose columns are the pins listed, in order; `-` and missing ones keep the
   * names of the header. Undefined after a report.
   */
  node(name: LibertyText, map: LibertyText | undefined): NetId | undefined {
    const { nodes, inputs } = this.#table;
    const index = nodes.indexOf(name.text.trim());
    if (index < 0) {
      const message = `${name.text} is no column of the state table, which has ${listed(nodes)}`;
      this.#build.report('name-undeclared', message, name);
      return undefined;
    }
    if (map === undefined) return this.#shared(index);
    const words = wordsOf(map.text);
    const columns = [...inputs, ...nodes];
    if (words.length > columns.length) {
      const message = `input_map has ${words.length} names, the state table ${columns.length} columns`;
      this.#build.report('range-invalid', message, map);
      return undefined;
    }
    const names = columns.map((column, i) => ((words[i] ?? '-') === '-' ? column : words[i]!));
    const output = this.#build.recording.net();
    this.#lower(index, output, names, map);
    return output;
  }

  #shared(index: number): NetId {
    const known = this.#nodes[index];
    if (known !== undefined) return known;
    // Made before it is driven: the table of another node may read it.
    const output = this.#build.recording.net();
    this.#nodes[index] = output;
    const { inputs, nodes } = this.#table;
    this.#lower(index, output, [...inputs, ...nodes], this.#table);
    return output;
  }

  /** Builds one node whose inputs have the given names, the node's own among them. */
  #lower(
    index: number,
    output: NetId,
    columns: readonly string[],
    place: { readonly start: number; readonly end: number },
  ): void {
    const rows = this.#rows;
    if (rows === undefined) return;
    const names = columnsOf(rows, index).map((column) => columns[column]!);
    const refuse = (reason: string): void => {
      const message = `the state table of cell ${this.#build.cell.name} is not supported: ${reason}`;
      this.#build.report('not-supported', `${message}; ${MODEL_CURE}`, this.#table);
    };
    if (names.length === 0 || names.length > MAX_INPUTS) {
      const node = this.#table.nodes[index];
      refuse(
        names.length === 0
          ? `nothing gives ${node} a value`
          : `${node} depends on ${names.length} inputs, ${MAX_INPUTS} can be looked through`,
      );
      return;
    }
    const nets = names.map((name) => this.#resolve(name, place));
    const found = nets.filter((net) => net !== undefined);
    if (found.length < nets.length) return;
    const table = new NodeTable(rows, index);
    const pins = { output, inputs: found, names, initial: 2 };
    const { name } = this.#build.cell;
    const source = eventsOfFunction(table.leaf, found.length);
    const cell = { name, table, source, isExact: false };
    const reason = lowerSequential(cell, pins, this.#build.recording);
    if (reason === undefined) return;
    this.#build.report('table-run', `the state table of cell ${name} ${reason}`, this.#table);
  }

  #resolve(
    name: string,
    place: { readonly start: number; readonly end: number },
  ): NetId | undefined {
    const net = this.#build.nets.resolve(name, scalarContext);
    if (typeof net === 'number') return net;
    this.#build.report(net.code, net.message, place);
    return undefined;
  }

  #parsed(): readonly StateRow[] | undefined {
    const { table, start, end } = this.#table;
    if (table === undefined) {
      this.#build.report('syntax-error', 'the state table has no table attribute', { start, end });
      return undefined;
    }
    const rows = parseStateTable(this.#table, table);
    if (!('message' in rows)) return rows;
    const place = placeIn(table, rows.start, rows.end);
    this.#build.report('syntax-error', `this is no state table: ${rows.message}`, place);
    return undefined;
  }
}
