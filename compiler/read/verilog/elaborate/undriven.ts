import { netId } from '../../../circuit/ids.js';
import { bitList } from './blockNames.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import type { Boundary } from './ports.js';
import { Flag, SymbolKind } from './symbols.js';
import type { Usage } from './usage.js';

/** Warns of signals that are read though nothing drives them. Ports are their instances' affair. */
export function reportUndriven(body: ModuleBody, usage: Usage, boundary: Boundary): void {
  const isPort = new Set<number>(boundary.nets.map((net) => body.builder.find(net)));
  const isOpen = (net: number): boolean => {
    const root = body.builder.find(netId(net));
    return usage.drivers[root] === 0 && usage.isRead[root] === 1 && !isPort.has(root);
  };
  for (const scope of body.blocks) {
    const { symbols } = scope;
    for (let symbol = 0; symbol < symbols.count; symbol++) {
      if (symbols.kind(symbol) === SymbolKind.Signal) reportSignal(body, scope, symbol, isOpen);
    }
  }
}

function reportSignal(
  body: ModuleBody,
  { symbols }: BlockScope,
  symbol: number,
  isOpen: (net: number) => boolean,
): void {
  const first = symbols.value(symbol);
  const width = symbols.width(symbol);
  const open: number[] = [];
  for (let bit = 0; bit < width; bit++) if (isOpen(first + bit)) open.push(bit);
  if (open.length === 0) return;
  const name = body.text(symbols.name(symbol));
  const what = open.length === width ? name : `${name}${bitList(symbols, symbol, open)}`;
  const flags = symbols.flags(symbol);
  const cause =
    (flags & Flag.Implicit) !== 0
      ? 'is declared nowhere, so that it is a net without driver; mend its spelling or declare it'
      : (flags & Flag.Variable) !== 0
        ? 'is read but never assigned'
        : 'is read but has no driver';
  const span = body.sources.span(symbols.start(symbol), symbols.end(symbol));
  body.design.undriven.add(`${what} ${cause}`, span);
}
