import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import { ConnectionKind, POSITIONAL } from '../instances.js';
import type { Expression } from '../syntax.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { type BoxPort, boxTemplate } from './boxTemplate.js';
import { forEachTarget } from './expressions.js';
import { Flag } from './symbols.js';
import { connectionExpression, readNets } from './terminals.js';

const DECLARE = 'give a file that declares the module and its ports';

interface Pin extends BoxPort {
  readonly nets: readonly NetId[];
}

/**
 * Places and connects an instance of a black box that no file defines: its ports are those that
 * its connections name, as wide as these are. A port that is connected to nets is of open
 * direction, one that is connected to anything else an input.
 */
export function connectUnknownBox(body: ModuleBody, scope: BlockScope, instance: number): void {
  const { children, design, module, sources } = body;
  const table = module.instances;
  const name = body.text(table.module(instance));
  const position = table.position(instance);
  const problem = problemOf(body, instance);
  if (problem !== undefined) {
    const { start, end } = body.wordAt(position);
    body.report('not-supported', `black box ${name} ${problem}`, start, end);
    return;
  }
  const pins: Pin[] = [];
  const end = table.connectionStart(instance + 1);
  for (let connection = table.connectionStart(instance); connection < end; connection++) {
    if (table.connectionKind(connection) === ConnectionKind.Empty) continue;
    const pin = pinOf(body, scope, instance, connection);
    if (pins.every((each) => each.name !== pin.name)) pins.push(pin);
    else reportTwice(body, instance, connection);
  }
  const template = design.add(boxTemplate(name, pins, false), { nameStart: position });
  const { index: source, offset } = sources.locate(position);
  const nets = pins.flatMap((pin) => pin.nets);
  const own = table.name(instance);
  const child = children.add(template, own, scope.index, source, offset, nets.length);
  for (const [place, net] of nets.entries()) children.setPort(child, place, net);
}

function problemOf({ module }: ModuleBody, instance: number): string | undefined {
  const table = module.instances;
  if (table.name(instance) === 0)
    return 'has an instance without a name for its ports; give it one';
  if (table.extras(instance)?.range !== undefined) {
    return `has an array of instances, which does not tell how wide its ports are; ${DECLARE}`;
  }
  const end = table.connectionStart(instance + 1);
  for (let connection = table.connectionStart(instance); connection < end; connection++) {
    if (table.connectionPort(instance, connection) !== POSITIONAL) continue;
    return `has connections by position, which do not tell its ports; ${DECLARE}`;
  }
  return undefined;
}

function pinOf(body: ModuleBody, scope: BlockScope, instance: number, connection: number): Pin {
  const table = body.module.instances;
  const name: NameId = table.connectionPort(instance, connection);
  const expression = connectionExpression(body, table, connection)!;
  const nets = readNets(body, scope, expression);
  const width = nets.length;
  return {
    name,
    text: body.text(name),
    direction: canBeDriven(body, scope, expression, nets) ? Flag.Inout : Flag.Input,
    width,
    range: width > 1 ? { msb: width - 1, lsb: 0 } : undefined,
    nets,
  };
}

// Reading nets, or fixed parts of them, gives these very nets; anything else makes new ones.
function canBeDriven(
  { builder }: ModuleBody,
  scope: BlockScope,
  expression: Expression,
  nets: readonly NetId[],
): boolean {
  if (!nets.every((net) => builder.isDeclared(net))) return false;
  let count = 0;
  let canBe = true;
  forEachTarget(expression, ({ path }) => {
    const binding = scope.resolve(path);
    count++;
    const hasNets = binding?.kind === 'signal' || binding?.kind === 'memory';
    canBe &&= hasNets && !binding.isVariable;
  });
  return canBe && count > 0;
}

function reportTwice(body: ModuleBody, instance: number, connection: number): void {
  const table = body.module.instances;
  const { start, end } = body.wordAt(table.connectionPosition(connection));
  const port = body.text(table.connectionPort(instance, connection));
  const own = body.text(table.name(instance));
  const message = `port ${port} of ${own} is connected twice; remove one of the two`;
  body.report('name-redeclared', message, start, end);
}
