import type { Signal } from '../../circuit/hierarchy.js';
import type { NetId } from '../../circuit/ids.js';
import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../names.js';
import { BlockScope } from '../verilog/elaborate/blockScope.js';
import { Children } from '../verilog/elaborate/children.js';
import { fuseBuffers } from '../verilog/elaborate/fuseBuffers.js';
import type { CellContext } from '../verilog/elaborate/libraryCell.js';
import { wordSpan } from '../verilog/elaborate/messages.js';
import { pruneUnused } from '../verilog/elaborate/pruning.js';
import { Recording } from '../verilog/elaborate/recording.js';
import { Flag, SymbolKind } from '../verilog/elaborate/symbols.js';
import type { BlockNames, Template, TemplatePort } from '../verilog/elaborate/template.js';
import { type Usage, usageOf, usesOf } from '../verilog/elaborate/usage.js';
import { type BuiltCell, buildCell } from './buildCell.js';
import type { LibertyCell, PinDirection } from './cell.js';
import { type CellSignal, signalsOf } from './cellSignals.js';

/**
 * Compiles a cell to what a Verilog module of the same ports would be compiled to, so that
 * instances of either are placed and connected alike.
 *
 * What is wrong with the cell is reported now, with the instance at `place` that needs it.
 */
export function cellTemplate(cell: LibertyCell, context: CellContext, place: Position): Template {
  const { names, sources, diagnostics, budget } = context;
  const recording = new Recording(budget);
  const { index, offset } = sources.locate(cell.start);
  recording.at(index, offset);
  const at = sources.span(place);
  const related = [
    { message: `cell ${cell.name} is used here`, span: wordSpan(at.source, at.start) },
  ];
  const built = buildCell(cell, recording, (code, message, { start, end }) =>
    diagnostics.add(code, message, sources.span(start, end), related),
  );
  const children = new Children();
  const usage = usageOf(recording, children, []);
  const canonical = fuseBuffers(recording, usage);
  const find = (net: number): number => canonical?.[net] ?? net;
  const boundary = Uint32Array.from(built.boundary);
  const pruned = pruneUnused(recording, children, boundary, canonical);
  const signals = signalsOf(cell, built);
  const ports = portsOf(cell, names);
  return {
    name: cell.name,
    // Its place in the netlist says more than that in the library.
    isCell: true,
    recording,
    children,
    canonical,
    unused: withoutSupplies(cell, built, usage, pruned, recording.netCount),
    ports,
    portOfName: new Map(ports.map(({ name }, port) => [name, port])),
    hasPortOrder: false,
    boundary,
    ...usesOf(usage, boundary, find),
    repeats: [],
    blocks: [blockNames(cell.name, signals, find)],
    scope: scopeOf(cell, signals, recording, context),
  };
}

/** Spares each instance the nets of its supply pins, which netlists mostly leave unconnected. */
function withoutSupplies(
  cell: LibertyCell,
  { pins }: BuiltCell,
  usage: Usage,
  pruned: Uint8Array | undefined,
  netCount: number,
): Uint8Array | undefined {
  let unused = pruned;
  for (const [index, { direction }] of cell.pins.entries()) {
    const net = pins[index]!;
    if (direction !== 'supply' || usage.isRead(net)) continue;
    unused ??= new Uint8Array(netCount);
    unused[net] = 1;
  }
  return unused;
}

const directionFlags: Readonly<Record<Exclude<PinDirection, 'internal'>, number>> = {
  input: Flag.Input,
  output: Flag.Output,
  inout: Flag.Inout,
  supply: Flag.Input,
};

function portsOf(cell: LibertyCell, names: NameTable): TemplatePort[] {
  let offset = 0;
  return cell.ports.map(({ name, direction, pins, range }) => {
    const port: TemplatePort = {
      name: names.internText(name),
      direction: directionFlags[direction],
      offset,
      width: pins.length,
      range: range && { msb: range.from, lsb: range.to },
    };
    offset += pins.length;
    return port;
  });
}

function blockNames(
  name: string,
  cellSignals: readonly CellSignal[],
  find: (net: number) => number,
): BlockNames {
  const signals: Signal[] = [];
  const nets: number[] = [];
  for (const { name: own, first, width, range } of cellSignals) {
    const { from: msb, to: lsb } = range ?? { from: 0, to: 0 };
    signals.push({
      name: own,
      msb,
      lsb,
      isVector: range !== undefined,
      offset: nets.length,
      width,
    });
    for (let bit = 0; bit < width; bit++) nets.push(find(first + bit));
  }
  return {
    name,
    parent: 0,
    names: { name, signals, bits: nets.length },
    nets: Uint32Array.from(nets),
  };
}

/** The cell's names for hierarchical names of the netlist. */
function scopeOf(
  cell: LibertyCell,
  signals: readonly CellSignal[],
  builder: Recording,
  { names, sources, diagnostics, budget }: CellContext,
): BlockScope {
  const blocks: BlockScope[] = [];
  const moduleName: NameId = names.internText(cell.name);
  const scope = new BlockScope(
    {
      ...{ builder, names, sources, diagnostics, budget, moduleName, blocks },
      initialValues: new Map<NetId, 0 | 1>(),
      bindingInside: () => undefined,
      report: (code, message, start, end) => {
        diagnostics.add(code, message, sources.span(start, end));
      },
    },
    undefined,
    0,
    moduleName,
  );
  blocks.push(scope);
  const { start, end } = cell;
  for (const { name, first, range } of signals) {
    scope.symbols.add({
      ...{ name: names.internText(name), kind: SymbolKind.Signal, value: first, start, end },
      flags: range === undefined ? 0 : Flag.Vector,
      ...(range && { msb: range.from, lsb: range.to }),
    });
  }
  return scope;
}
