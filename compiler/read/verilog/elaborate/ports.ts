import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import { lowerExpression } from '../behaviour/index.js';
import type { Expression, HeaderPort } from '../syntax.js';
import type { ModuleBody } from './body.js';
import { forEachTarget } from './expressions.js';
import { Flag, SymbolKind } from './symbols.js';
import type { TemplatePort } from './template.js';

/** The ports of a module, and the nets behind all their bits in order. */
export interface Boundary {
  readonly ports: readonly TemplatePort[];
  readonly portOfName: ReadonlyMap<NameId, number>;
  readonly nets: readonly NetId[];
}

/** Matches the header of a module with its declarations (IEEE 1364-2005, clause 12.3). */
export function bindPorts(body: ModuleBody): Boundary {
  const ports: TemplatePort[] = [];
  const portOfName = new Map<NameId, number>();
  const nets: NetId[] = [];
  const inHeader = new Set<NameId>();
  for (const header of body.module.ports) {
    const { name, start, end } = header;
    if (name !== 0 && portOfName.has(name)) {
      const message = `port ${body.text(name)} is listed twice; remove or rename one of the two`;
      body.report('name-redeclared', message, start, end);
      continue;
    }
    if (name !== 0) portOfName.set(name, ports.length);
    const { direction, bits, range } = bindPort(body, header, inHeader);
    ports.push({ name, direction, offset: nets.length, width: bits.length, range });
    for (const net of bits) nets.push(net);
  }
  reportUnlisted(body, inHeader);
  return { ports, portOfName, nets };
}

interface BoundPort {
  readonly direction: number;
  readonly bits: readonly NetId[];
  readonly range: TemplatePort['range'];
}

function bindPort(body: ModuleBody, header: HeaderPort, inHeader: Set<NameId>): BoundPort {
  const { expression } = header;
  const none: BoundPort = { direction: Flag.Inout, bits: [], range: undefined };
  if (expression === undefined) return none;
  let direction = -1;
  let isBound = true;
  forEachTarget(expression, ({ path, start, end }) => {
    inHeader.add(path[0]!);
    const own = path.length === 1 ? directionOf(body, path[0]!) : 0;
    if (own === 0) {
      const text = body.text(path[0]!);
      const message = `port ${text} has no direction; declare it as input, output or inout`;
      body.report('name-undeclared', message, start, end);
      isBound = false;
    } else if (direction >= 0 && own !== direction) {
      const message = 'the parts of one port have different directions; give them one';
      body.report('not-supported', message, header.start, header.end);
      isBound = false;
    } else direction = own;
  });
  if (!isBound || direction < 0) return none;
  return { direction, ...portNets(body, expression) };
}

function directionOf({ root }: ModuleBody, name: NameId): number {
  const symbol = root.symbols.find(name);
  if (symbol < 0 || root.symbols.kind(symbol) !== SymbolKind.Signal) return 0;
  return root.symbols.flags(symbol) & Flag.Inout;
}

function portNets({ root }: ModuleBody, expression: Expression): Omit<BoundPort, 'direction'> {
  const binding = expression.kind === 'name' ? root.resolve(expression.path) : undefined;
  if (binding?.kind !== 'signal') {
    // A part or concatenation: reading it gives the very nets it is made of.
    return { bits: lowerExpression(expression, root), range: undefined };
  }
  const { msb, lsb, isVector, nets } = binding;
  return { bits: nets, range: isVector ? { msb, lsb } : undefined };
}

function reportUnlisted(body: ModuleBody, inHeader: ReadonlySet<NameId>): void {
  const { symbols } = body.root;
  for (let place = 0; place < symbols.count; place++) {
    const symbol = symbols.at(place);
    if ((symbols.flags(symbol) & Flag.Inout) === 0) continue;
    const name = symbols.name(symbol);
    if (symbols.kind(symbol) !== SymbolKind.Signal || inHeader.has(name)) continue;
    const text = body.text(name);
    const message = `${text} has a direction but is not in the port list of the module; add it there`;
    body.report('port-unknown', message, symbols.start(symbol), symbols.end(symbol));
  }
}
