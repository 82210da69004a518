import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import { bitList } from './blockNames.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody, OpenInput } from './body.js';
import { Flag, SymbolKind } from './symbols.js';
import { Drive } from './template.js';
import type { Usage } from './usage.js';

/**
 * Warns of signals that are read though nothing drives them. Ports are their instances' affair.
 *
 * `isDrivenAbove` tells of nets that the modules around drive by hierarchical names, so that this
 * waits until the whole design is compiled.
 */
export function reportUndriven(
  body: ModuleBody,
  usage: Usage,
  isDrivenAbove: (net: NetId) => boolean,
): void {
  const isDriven = (net: NetId): boolean => {
    const root = body.builder.find(net);
    return usage.driveOf(root) !== Drive.None || isDrivenAbove(root);
  };
  const isOpen = (net: number): boolean => {
    const root = body.builder.find(netId(net));
    return usage.isOpen(root) && !isDrivenAbove(root);
  };
  for (const open of body.openInputs) reportOpenInput(body, open, isDriven);
  for (const scope of body.blocks) {
    const { symbols } = scope;
    for (let place = 0; place < symbols.count; place++) {
      const symbol = symbols.at(place);
      const kind = symbols.kind(symbol);
      if (kind === SymbolKind.Signal) {
        reportSignal(body, scope, symbol, { first: symbols.value(symbol), index: '' }, isOpen);
      } else if (kind === SymbolKind.Memory && (symbols.flags(symbol) & Flag.Variable) === 0) {
        // Only of nets: a word of a memory that nothing ever writes is often meant so.
        for (const word of scope.vectors(symbol)) reportSignal(body, scope, symbol, word, isOpen);
      }
    }
  }
}

/** Whether `reportUndriven` may find anything; `usage` must know the nets of ports. */
export function mayBeUndriven({ openInputs }: ModuleBody, usage: Usage): boolean {
  if (openInputs.length > 0) return true;
  for (let net = 0; net < usage.netCount; net++) if (usage.isOpen(net)) return true;
  return false;
}

function reportOpenInput(
  body: ModuleBody,
  { child, port, instance }: OpenInput,
  isDriven: (net: NetId) => boolean,
): void {
  const { children, design, module } = body;
  const { reads, drives, isBox } = design.templates[children.template(child)]!;
  if (isBox) return;
  const isOpen = (place: number): boolean => {
    const net = children.port(child, place);
    const hasValue = drives[place] !== Drive.None || (net !== NO_NET && isDriven(net));
    return reads[place] === 1 && !hasValue;
  };
  const places = Array.from({ length: port.width }, (_, bit) => port.offset + bit);
  if (!places.some(isOpen)) return;
  const own = body.text(module.instances.name(instance));
  const message = `input ${body.text(port.name)} of ${own} is not connected`;
  design.undriven.add(message, design.wordSpan(module.instances.position(instance)));
}

function reportSignal(
  body: ModuleBody,
  { symbols }: BlockScope,
  symbol: number,
  { first, index }: { readonly first: number; readonly index: string },
  isOpen: (net: number) => boolean,
): void {
  const width = symbols.width(symbol);
  const open: number[] = [];
  for (let bit = 0; bit < width; bit++) if (isOpen(first + bit)) open.push(bit);
  if (open.length === 0) return;
  const name = body.text(symbols.name(symbol)) + index;
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
