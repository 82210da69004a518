import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import type { Span } from '../../../diagnostics/source.js';
import type { NameId } from '../../names.js';
import { bitList } from './blockNames.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { isWired, type NetClasses } from './defaults.js';
import { wordSpan } from './messages.js';
import { BUS_PART, DROPPED, type Origin, Pin } from './recording.js';
import { Flag, NetClass, SymbolKind } from './symbols.js';
import { Drive, type Template } from './template.js';
import type { Usage } from './usage.js';

/** Reports nets with several drivers, unless `wand` or `wor` resolves them (clause 4.6.3). */
export function checkConflicts(body: ModuleBody, usage: Usage, classes: NetClasses): void {
  const conflicts = new Map<number, Origin[]>();
  for (let net = 0; net < usage.netCount; net++) {
    const count = usage.drivers(net);
    if (count === 0) continue;
    const netClass = classes.get(net);
    const isSupply = netClass === NetClass.Supply0 || netClass === NetClass.Supply1;
    const limit = isSupply ? 0 : 1;
    if (count > limit && !isWired(netClass)) {
      conflicts.set(net, isSupply ? [body.builder.netOrigin(net)] : []);
    }
  }
  const several = severalDriven(body, usage);
  for (const net of several) conflicts.set(net, []);
  if (conflicts.size === 0) return;
  collectDrivers(body, conflicts, several);
  reportConflicts(body, conflicts);
}

const none: ReadonlySet<number> = new Set();

/** Variables that several processes drive, or a process and something else; z or not is no matter. */
function severalDriven(body: ModuleBody, usage: Usage): ReadonlySet<number> {
  const { builder, floatingVariables, copiedVariables } = body;
  if (floatingVariables.length === 0 && copiedVariables.length === 0) return none;
  const driven = new Set<number>();
  const several = new Set<number>();
  // A copy of a net that is never z has stayed a gate.
  const copied = copiedVariables.filter((net) => usage.drivers(builder.find(net)) === 0);
  for (const variable of [...floatingVariables, ...copied]) {
    const net = builder.find(variable);
    if (driven.has(net) || usage.drivers(net) > 0) several.add(net);
    driven.add(net);
  }
  return several;
}

function collectDrivers(
  body: ModuleBody,
  conflicts: ReadonlyMap<number, Origin[]>,
  parts: ReadonlySet<number>,
): void {
  const { builder, children, design } = body;
  for (let driver = 0; driver < builder.driverCount; driver++) {
    const kind = builder.driverKind(driver);
    const net = builder.find(builder.driverOutput(driver));
    if (kind === DROPPED || (kind === BUS_PART && !parts.has(net))) continue;
    conflicts.get(net)?.push(builder.driverOrigin(driver));
  }
  for (let child = 0; child < children.count; child++) {
    const template = design.templates[children.template(child)]!;
    const origin = children.origin(child);
    template.drives.forEach((drive, place) => {
      const net = children.port(child, place);
      if (drive !== Drive.Full || net === NO_NET) return;
      conflicts.get(builder.find(net))?.push(origin);
    });
    for (const { childNet, net } of children.imports(child)) {
      if (template.driveOf(childNet) !== Drive.Full) continue;
      conflicts.get(builder.find(net))?.push(origin);
    }
  }
}

/** One message for each signal, however many of its bits are concerned. */
function reportConflicts(body: ModuleBody, conflicts: Map<number, Origin[]>): void {
  for (const block of body.blocks) {
    for (let place = 0; place < block.symbols.count; place++) {
      const symbol = block.symbols.at(place);
      if (isArray(block, symbol)) {
        reportArray(body, block, symbol, conflicts);
        continue;
      }
      for (const vector of block.vectors(symbol)) {
        reportVector(body, block, symbol, vector, conflicts);
      }
    }
  }
  // What is left are nets of other modules.
  const said = new Set<string>();
  for (const [net, drivers] of conflicts) {
    const far = farSignal(body, netId(net));
    if (far !== undefined && said.has(far.key)) continue;
    if (far !== undefined) said.add(far.key);
    const isMemory = far && isArray(far.block, far.symbol) && areClocked(body, new Set([net]));
    const cure = isMemory ? wayOut(body, far.block, far.symbol) : leave;
    report(body, far?.path ?? 'a net without a name', drivers, cure);
  }
}

interface FarSignal {
  /** Tells it from all others. */
  readonly key: string;
  readonly path: string;
  readonly block: BlockScope;
  readonly symbol: number;
}

/** The signal or array of an instance that a net stands for. */
function farSignal({ blocks, children, design }: ModuleBody, net: NetId): FarSignal | undefined {
  const path: NameId[] = [];
  const key: number[] = [];
  let around: readonly BlockScope[] = blocks;
  let within = children;
  for (let at = within.reached(net); at !== undefined; at = within.reached(at.childNet)) {
    const template = design.templates[within.template(at.child)]!;
    path.push(...blockPath(around[within.block(at.child)]!), within.name(at.child));
    key.push(at.child);
    const found = symbolOf(template, at.childNet);
    if (found !== undefined) {
      const { block, symbol } = found;
      path.push(...blockPath(block), block.symbols.name(symbol));
      const texts = path.map((name) => design.text(name));
      return {
        key: [...key, block.index, symbol].join(),
        path: texts.join('.'),
        block,
        symbol,
      };
    }
    around = template.scope?.shared.blocks ?? [];
    within = template.children;
  }
  return undefined;
}

/** The names of the blocks of a module that lead to one of them. */
function blockPath({ parent, name }: BlockScope): NameId[] {
  return parent === undefined ? [] : [...blockPath(parent), name];
}

/** The symbol that a net of a module belongs to. */
function symbolOf(
  { scope, canonical }: Template,
  net: NetId,
): { readonly block: BlockScope; readonly symbol: number } | undefined {
  for (const block of scope?.shared.blocks ?? []) {
    const { symbols } = block;
    for (let place = 0; place < symbols.count; place++) {
      const symbol = symbols.at(place);
      const width = symbols.width(symbol);
      for (const { first } of block.vectors(symbol)) {
        for (let own: number = first; own < first + width; own++) {
          if ((canonical?.[own] ?? own) === net) return { block, symbol };
        }
      }
    }
  }
  return undefined;
}

function reportVector(
  body: ModuleBody,
  { symbols }: BlockScope,
  symbol: number,
  { first, index }: { readonly first: number; readonly index: string },
  conflicts: Map<number, Origin[]>,
): void {
  const width = symbols.width(symbol);
  const bits: number[] = [];
  let drivers: Origin[] | undefined;
  for (let bit = 0; bit < width; bit++) {
    const net = body.builder.find(netId(first + bit));
    const found = conflicts.get(net);
    if (found === undefined) continue;
    conflicts.delete(net);
    drivers ??= found;
    bits.push(bit);
  }
  if (drivers === undefined) return;
  const name = body.text(symbols.name(symbol)) + index;
  report(body, width === 1 ? name : `${name}${bitList(symbols, symbol, bits)}`, drivers);
}

const isArray = ({ symbols }: BlockScope, symbol: number): boolean =>
  symbols.kind(symbol) === SymbolKind.Memory && (symbols.flags(symbol) & Flag.Variable) !== 0;

/** One message for all words of an array that is built from registers. */
function reportArray(
  body: ModuleBody,
  block: BlockScope,
  symbol: number,
  conflicts: Map<number, Origin[]>,
): void {
  const nets: NetId[] = [];
  let drivers: Origin[] | undefined;
  for (const { first } of block.vectors(symbol)) {
    for (let bit = 0; bit < block.symbols.width(symbol); bit++) {
      const net = body.builder.find(netId(first + bit));
      const found = conflicts.get(net);
      if (found === undefined) continue;
      conflicts.delete(net);
      drivers ??= found;
      nets.push(net);
    }
  }
  if (drivers === undefined) return;
  const cure = areClocked(body, new Set(nets)) ? wayOut(body, block, symbol) : leave;
  report(body, body.text(block.symbols.name(symbol)), drivers, cure);
}

/** Whether nothing but clock edges gives certain nets values, as far as this module does. */
function areClocked({ builder }: ModuleBody, nets: ReadonlySet<number>): boolean {
  for (let driver = 0; driver < builder.driverCount; driver++) {
    const kind = builder.driverKind(driver);
    if (kind === DROPPED || !nets.has(builder.find(builder.driverOutput(driver)))) continue;
    const start = builder.faninStart(driver);
    const pins = [builder.faninAt(start + Pin.Set), builder.faninAt(start + Pin.Reset)];
    if (kind !== GateKind.Register || pins.some((net) => net !== NO_NET)) return false;
  }
  return true;
}

const leave = 'leave one of them';

/** An array that clock edges alone write can be a memory, with a port for each of them. */
function wayOut({ inRegisters }: ModuleBody, block: BlockScope, symbol: number): string {
  const { symbols } = block;
  if (inRegisters.has(symbols.start(symbol))) return leave;
  const words = [...block.vectors(symbol)].length;
  const bits = words * symbols.width(symbol);
  return (
    `${leave}, or let it be a memory of ${bits} bits, with a port for each: ` +
    `--memories-from ${bits}`
  );
}

function report(
  body: ModuleBody,
  what: string,
  drivers: readonly Origin[],
  cure: string = leave,
): void {
  const [first, second, ...others] = drivers.map((origin) => spanOf(body, origin));
  const related = [first, ...others].flatMap((span) =>
    span === undefined ? [] : [{ message: 'also driven here', span }],
  );
  const message = `${what} has ${drivers.length} drivers; ${cure}`;
  body.diagnostics.add('net-multiply-driven', message, second ?? first, related.slice(0, 10));
}

function spanOf({ sources }: ModuleBody, { source, offset }: Origin): Span {
  return wordSpan(sources.sources[source]!, offset);
}
