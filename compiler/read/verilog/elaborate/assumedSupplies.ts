import { type NetId, netId } from '../../../circuit/ids.js';
import { supplyLevel } from '../../../circuit/supplyNames.js';
import type { Design } from './design.js';
import { Flag, SymbolKind } from './symbols.js';
import { Drive, type Template } from './template.js';

/**
 * The nets of the top module that nothing drives and whose names are those of supplies: inouts, and
 * inner nets that are read. Gives the level that each is held at, and says so.
 */
export function assumedSupplies(design: Design, top: Template): Map<NetId, 0 | 1> {
  const supplies = new Map<NetId, 0 | 1>();
  const { scope, canonical, ports } = top;
  const hasInout = ports.some(({ direction }) => direction === Flag.Inout);
  if (scope === undefined || (!hasInout && top.mayHaveOpen === undefined)) return supplies;
  const directions = directionsOf(top);
  const { symbols } = scope;
  for (let place = 0; place < symbols.count; place++) {
    const symbol = symbols.at(place);
    if (symbols.kind(symbol) !== SymbolKind.Signal || symbols.width(symbol) !== 1) continue;
    if ((symbols.flags(symbol) & Flag.Variable) !== 0) continue;
    const own = symbols.value(symbol);
    const net = netId(canonical?.[own] ?? own);
    const drive = top.driveOf(net);
    // A pull is no driver: a supply overrides it.
    if ((drive !== Drive.None && drive !== Drive.Weak) || design.driven.has(top, net)) continue;
    const direction = directions.get(net);
    if (direction === undefined ? !top.readsNet(net) : direction !== Flag.Inout) continue;
    const name = design.text(symbols.name(symbol));
    const level = supplyLevel(name);
    if (level === undefined || supplies.has(net)) continue;
    supplies.set(net, level);
    const what = `a supply, held at ${level}, as its name says`;
    const message =
      direction === undefined
        ? `${name} has no driver and is taken for ${what}; drive it where it is none`
        : `inout ${name} of the top module is no input but ${what}; declare it as an input where it is one`;
    const span = design.sources.span(symbols.start(symbol), symbols.end(symbol));
    design.diagnostics.add('supply-assumed', message, span);
  }
  return supplies;
}

/** The direction of each net of a port. */
function directionsOf({ ports, boundary }: Template): Map<number, number> {
  const directions = new Map<number, number>();
  for (const { direction, offset, width } of ports) {
    for (let place = offset; place < offset + width; place++) {
      directions.set(boundary[place]!, direction);
    }
  }
  return directions;
}
