import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import type { Span } from '../../../diagnostics/source.js';
import { bitList } from './blockNames.js';
import type { ModuleBody } from './body.js';
import type { NetClasses } from './defaults.js';
import { wordSpan } from './messages.js';
import type { Origin } from './recording.js';
import { Flag, NetClass, SymbolKind } from './symbols.js';
import type { Usage } from './usage.js';

/** One of several drivers of a net: an entry of the recording, or a port of a child. */
type Driver =
  | { readonly kind: 'own'; readonly driver: number; readonly origin: Origin }
  | {
      readonly kind: 'child';
      readonly child: number;
      readonly place: number;
      readonly origin: Origin;
    };

/**
 * Resolves nets with several drivers: `wand` and `wor` get the gate that they stand for (IEEE
 * 1364-2005, clause 4.6.3), all others are reported.
 */
export function resolveConflicts(body: ModuleBody, usage: Usage, classes: NetClasses): void {
  const conflicts = collectDrivers(body, usage);
  for (const [net, drivers] of conflicts) {
    const netClass = classes.get(net);
    if (netClass !== NetClass.And && netClass !== NetClass.Or) continue;
    conflicts.delete(net);
    const kind = netClass === NetClass.And ? GateKind.And : GateKind.Or;
    combine(body, netId(net), kind, drivers);
  }
  if (conflicts.size > 0) reportConflicts(body, conflicts);
}

function collectDrivers(body: ModuleBody, usage: Usage): Map<number, Driver[]> {
  const conflicts = new Map<number, Driver[]>();
  usage.drivers.forEach((count, net) => {
    if (count > 1) conflicts.set(net, []);
  });
  if (conflicts.size === 0) return conflicts;
  const { builder, children, design } = body;
  for (let driver = 0; driver < builder.driverCount; driver++) {
    const origin = builder.driverOrigin(driver);
    conflicts
      .get(builder.find(builder.driverOutput(driver)))
      ?.push({ kind: 'own', driver, origin });
  }
  for (let child = 0; child < children.count; child++) {
    const template = design.templates[children.template(child)]!;
    template.drives.forEach((drives, place) => {
      const net = children.port(child, place);
      if (drives === 0 || net === NO_NET) return;
      const origin = children.origin(child);
      conflicts.get(builder.find(net))?.push({ kind: 'child', child, place, origin });
    });
    for (const { childNet, net } of children.imports(child)) {
      if (!template.drivesNet(childNet)) continue;
      const origin = children.origin(child);
      conflicts.get(builder.find(net))?.push({ kind: 'child', child, place: -1, origin });
    }
  }
  return conflicts;
}

/** Gives each driver a net of its own and lets a gate drive the net from them. */
function combine(body: ModuleBody, net: NetId, kind: GateKind, drivers: readonly Driver[]): void {
  const { builder, children } = body;
  const sources: NetId[] = [];
  for (const each of drivers) {
    builder.at(each.origin.source, each.origin.offset);
    if (each.kind === 'own') {
      const source = builder.net();
      builder.redirect(each.driver, source);
      sources.push(source);
    } else if (isOutput(body, each.child, each.place)) {
      const source = builder.net();
      children.setPort(each.child, each.place, source);
      sources.push(source);
    } else {
      body.diagnostics.add(
        'not-supported',
        'an inout port that drives a wired net together with others is not supported; ' +
          'split it into an input and an output',
        spanOf(body, each.origin),
      );
    }
  }
  const { source, offset } = builder.netOrigin(net);
  builder.at(source, offset);
  builder.drive(net, kind, sources);
}

function isOutput({ design, children }: ModuleBody, child: number, place: number): boolean {
  const { ports } = design.templates[children.template(child)]!;
  const port = ports.find(({ offset, width }) => offset <= place && place < offset + width);
  return port !== undefined && port.direction === Flag.Output;
}

/** One message for each signal, however many of its bits are concerned. */
function reportConflicts(body: ModuleBody, conflicts: Map<number, Driver[]>): void {
  for (const { symbols } of body.blocks) {
    for (let symbol = 0; symbol < symbols.count; symbol++) {
      if (symbols.kind(symbol) !== SymbolKind.Signal) continue;
      const first = symbols.value(symbol);
      const width = symbols.width(symbol);
      const bits: number[] = [];
      let drivers: Driver[] | undefined;
      for (let bit = 0; bit < width; bit++) {
        const net = body.builder.find(netId(first + bit));
        const found = conflicts.get(net);
        if (found === undefined) continue;
        conflicts.delete(net);
        drivers ??= found;
        bits.push(bit);
      }
      if (drivers === undefined) continue;
      const name = body.text(symbols.name(symbol));
      report(body, width === 1 ? name : `${name}${bitList(symbols, symbol, bits)}`, drivers);
    }
  }
  for (const drivers of conflicts.values()) report(body, 'a net without a name', drivers);
}

function report(body: ModuleBody, what: string, drivers: readonly Driver[]): void {
  const [first, second, ...others] = drivers.map(({ origin }) => spanOf(body, origin));
  const related = [first, ...others].flatMap((span) =>
    span === undefined ? [] : [{ message: 'also driven here', span }],
  );
  const message = `${what} has ${drivers.length} drivers; leave one of them`;
  body.diagnostics.add('net-multiply-driven', message, second ?? first, related.slice(0, 10));
}

function spanOf({ sources }: ModuleBody, { source, offset }: Origin): Span {
  return wordSpan(sources.sources[source]!, offset);
}
