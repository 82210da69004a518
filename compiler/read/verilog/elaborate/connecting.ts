import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import { supplyLevel } from '../../../circuit/supplyNames.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import { listed } from '../../listed.js';
import { hintOf } from '../../nearest.js';
import { ConnectionKind, POSITIONAL } from '../instances.js';
import type { BlockScope } from './blockScope.js';
import { type ModuleBody, NOT_PLACED } from './body.js';
import { fitted } from './fitting.js';
import { connectGate } from './gateInstances.js';
import { Flag } from './symbols.js';
import { Drive, type Template, type TemplatePort } from './template.js';
import { connectionExpression, drivenNets, NOT_SIMPLE, readNets, simpleNet } from './terminals.js';
import { connectUnknownBox } from './unknownBoxes.js';
import { wordBefore } from './wordNear.js';

/** Connects every instance, and builds the built-in gates (IEEE 1364-2005, clause 12.3). */
export function connectInstances(body: ModuleBody): void {
  const table = body.module.instances;
  let number = 0;
  for (const { scope, item } of body.instances) {
    for (let instance = item.first; instance < item.first + item.count; instance++) {
      if (table.module(instance) < 0) connectGate(body, scope, instance);
      else connectInstance(body, scope, instance, number++);
    }
  }
}

/** One instance, or an array of them: `count` children from `child` on. */
interface Connected {
  readonly scope: BlockScope;
  readonly instance: number;
  readonly child: number;
  readonly count: number;
  readonly template: Template;
}

function connectInstance(
  body: ModuleBody,
  scope: BlockScope,
  instance: number,
  number: number,
): void {
  const child = body.placed.get(number);
  const table = body.module.instances;
  const first = table.connectionStart(instance);
  const end = table.connectionStart(instance + 1);
  const definition = table.module(instance);
  const isUnknown = child === NOT_PLACED && body.design.definition(definition) === undefined;
  if (isUnknown && body.design.blackBoxes.has(definition)) {
    connectUnknownBox(body, scope, instance);
    return;
  }
  if (child === NOT_PLACED) {
    // Its outputs are unknown; implicit nets shall not be complained about on top.
    for (let c = first; c < end; c++) simpleNet(body, scope, table, c, false);
    return;
  }
  const template = body.design.templates[body.children.template(child)]!;
  const count = body.arrayLength(number);
  const { ports } = template;
  // Places of more than 31 ports are told apart by a set, which few instances need.
  const seen = ports.length > 31 ? new Set<number>() : undefined;
  let seenBits = 0;
  let connections = 0;
  for (let connection = first; connection < end; connection++) {
    // Most netlists name the ports in the order of their declaration.
    const position = connection - first;
    const isNext = ports[position]?.name === table.connectionPort(instance, connection);
    const place = isNext ? position : portPlace(body, template, instance, connection, position);
    if (place < 0) continue;
    const isSeen = seen === undefined ? (seenBits >>> place) & 1 : seen.has(place);
    if (isSeen) {
      reportTwice(body, template, instance, connection, place);
      continue;
    }
    seenBits |= 1 << place;
    seen?.add(place);
    if (table.connectionKind(connection) !== ConnectionKind.Empty) connections++;
    const port = ports[place]!;
    if (port.width === 1 && count === 1) {
      const net = simpleNet(body, scope, table, connection, mayDrive(template, port));
      if (net !== NOT_SIMPLE) {
        connectNet(body, child, port.offset, net);
        continue;
      }
    }
    connectNets(body, { scope, instance, child, count, template }, connection, port);
  }
  if (connections < ports.length) {
    finishUnconnected(body, { scope, instance, child, count, template });
  }
  if (template.repeats.length > 0) joinRepeats(body, child, count, template);
}

/** Index of the port that a connection names, or -1 after a report. */
function portPlace(
  body: ModuleBody,
  template: Template,
  instance: number,
  connection: number,
  position: number,
): number {
  const table = body.module.instances;
  const name = table.connectionPort(instance, connection);
  const { ports, portOfName } = template;
  if (name === POSITIONAL && !template.hasPortOrder) {
    if (position === 0) reportUnordered(body, template, table.connectionPosition(connection));
    return -1;
  }
  if (name === POSITIONAL) {
    if (position < ports.length) return position;
    if (position === ports.length) {
      const { start, end } = body.wordAt(table.connectionPosition(connection));
      const got = table.connectionStart(instance + 1) - table.connectionStart(instance);
      const message = `${template.name} has ${ports.length} ports, got ${got} connections`;
      body.report('port-count', message, start, end);
    }
    return -1;
  }
  const place = portOfName.get(name);
  if (place !== undefined) return place;
  const text = body.text(name);
  const at = (): ReturnType<typeof wordBefore> =>
    wordBefore(body, name, table.connectionPosition(connection));
  if (supplyLevel(text) !== undefined) {
    body.design.absentSupplies.add(template.name, text, () => {
      const { start, end } = at();
      return body.sources.span(start, end);
    });
    return -1;
  }
  const { start, end } = at();
  const known = ports.flatMap((port) => (port.name === 0 ? [] : [body.text(port.name)]));
  const list = known.length === 0 ? 'it has none' : `it has ${listed(known)}`;
  const message = `${template.name} has no port ${text}; ${list}${hintOf(text, known)}`;
  body.report('port-unknown', message, start, end);
  return -1;
}

function reportUnordered(body: ModuleBody, { name, ports }: Template, place: Position): void {
  const { start, end } = body.wordAt(place);
  const [first] = ports;
  const example = first === undefined ? '' : `, as .${body.text(first.name)}(…)`;
  const message = `the library of ${name} gives its pins no order; connect them by name${example}`;
  body.report('not-supported', message, start, end);
}

function reportTwice(
  body: ModuleBody,
  template: Template,
  instance: number,
  connection: number,
  place: number,
): void {
  const table = body.module.instances;
  const own = table.connectionPort(instance, connection);
  const at = table.connectionPosition(connection);
  const { start, end } = own === POSITIONAL ? body.wordAt(at) : wordBefore(body, own, at);
  const port = body.text(template.ports[place]!.name);
  const message = `port ${port} of ${body.text(table.name(instance))} is connected twice; remove one of the two`;
  body.report('name-redeclared', message, start, end);
}

/** Connects a port to what is no single net that can be told at once. */
function connectNets(
  body: ModuleBody,
  connected: Connected,
  connection: number,
  port: TemplatePort,
): void {
  const { scope, child, count, template } = connected;
  const table = body.module.instances;
  const drives = mayDrive(template, port);
  const expression = connectionExpression(body, table, connection);
  if (expression === undefined || port.width === 0) return;
  const nets = drives ? drivenNets(body, scope, expression) : readNets(body, scope, expression);
  if (nets === undefined) return;
  const name = `port ${body.text(port.name)} of ${body.text(table.name(connected.instance))}`;
  let fit = fitted(body, { nets, width: port.width, count, port: name, expression });
  if (fit === undefined) return;
  // A short value is extended as in an assignment (clause 12.3.9.2), which may matter inside it.
  if (!drives && fit.length < port.width) fit = readNets(body, scope, expression, port.width);
  body.buildAt(expression.start);
  if (port.direction === Flag.Output) driveSurplus(body, nets, port.width * count);
  const isShared = fit.length <= port.width;
  for (let element = 0; element < count; element++) {
    const from = isShared ? 0 : element * port.width;
    for (let bit = 0; bit < port.width; bit++) {
      const net = fit[from + bit];
      if (net !== undefined) connectNet(body, child + element, port.offset + bit, net);
    }
  }
}

// An inout that is only read, such as a supply pin, may be tied to a constant as an input is.
function mayDrive({ drives }: Template, { direction, offset, width }: TemplatePort): boolean {
  if (direction === Flag.Input || direction === Flag.Output) return direction === Flag.Output;
  for (let place = offset; place < offset + width; place++) {
    if (drives[place] !== Drive.None) return true;
  }
  return false;
}

/** Bits beyond those of an output port get 0, as in an assignment of a shorter value. */
function driveSurplus(body: ModuleBody, nets: readonly NetId[], width: number): void {
  for (const net of nets.slice(width)) body.builder.drive(net, GateKind.Zero, []);
}

function connectNet(body: ModuleBody, child: number, place: number, net: NetId): void {
  const known = body.children.port(child, place);
  // A hierarchical name may have made a net for the port before.
  if (known === NO_NET) body.children.setPort(child, place, net);
  else body.builder.join(known, net);
}

/** Where one net of the child stands behind several ports, it makes the parent's nets one. */
function joinRepeats(body: ModuleBody, child: number, count: number, template: Template): void {
  const { children, builder } = body;
  for (const { first, second } of template.repeats) {
    for (let element = child; element < child + count; element++) {
      const a = children.port(element, first);
      const b = children.port(element, second);
      if (a === NO_NET) children.setPort(element, first, b);
      else if (b === NO_NET) children.setPort(element, second, a);
      else builder.join(a, b);
    }
  }
}

/** Gives open inputs what `unconnected_drive` says. */
function finishUnconnected(body: ModuleBody, connected: Connected): void {
  const { child, count, template, instance } = connected;
  const { children, module } = body;
  for (const port of template.ports) {
    if (port.direction !== Flag.Input || children.port(child, port.offset) !== NO_NET) continue;
    if (module.unconnectedDrive !== undefined) {
      body.buildAt(module.instances.position(instance));
      const kind = module.unconnectedDrive === 1 ? GateKind.One : GateKind.Zero;
      const net = body.builder.constant(kind);
      for (let element = child; element < child + count; element++) {
        for (let bit = 0; bit < port.width; bit++) {
          children.setPort(element, port.offset + bit, net);
        }
      }
      // Library cells have supply pins that mostly stay open, and that they do not read.
    } else if (isRead(template, port)) body.openInputs.push({ child, port, instance });
  }
}

function isRead({ reads }: Template, { offset, width }: TemplatePort): boolean {
  for (let place = offset; place < offset + width; place++) if (reads[place] === 1) return true;
  return false;
}
