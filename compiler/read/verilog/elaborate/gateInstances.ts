import { PartKind, Strength } from '../../../circuit/busParts.js';
import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import { builtinGates, POSITIONAL } from '../instances.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { evaluateRange } from './constants.js';
import { fitted } from './fitting.js';
import { type GateRow, type GateWord, gateRows, terminalsOf } from './gateRows.js';
import type { Recording } from './recording.js';
import { type Strengths, strengthsOf } from './strengths.js';
import { connectionExpression, drivenNets, NOT_SIMPLE, readNets, simpleNet } from './terminals.js';

/** Builds a built-in gate, or an array of them. */
export function connectGate(body: ModuleBody, scope: BlockScope, instance: number): void {
  const table = body.module.instances;
  const word = builtinGates[-1 - table.module(instance)]!;
  const row = gateRows[word];
  const extras = table.extras(instance);
  const range = extras?.range && evaluateRange(extras.range, scope);
  if (extras?.range !== undefined && range === undefined) return;
  const count = range ? Math.abs(range.msb - range.lsb) + 1 : 1;
  const gate = { word, row, instance, count, strengths: strengthsOf(extras?.strength) };
  if (!checkTerminals(body, gate)) return;
  build(body, scope, gate);
}

interface Gate {
  readonly word: GateWord;
  readonly row: GateRow;
  readonly instance: number;
  /** Number of elements of an array of gates, else 1. */
  readonly count: number;
  readonly strengths: Strengths | undefined;
}

function checkTerminals(body: ModuleBody, { word, row, instance }: Gate): boolean {
  const table = body.module.instances;
  const first = table.connectionStart(instance);
  const got = table.connectionStart(instance + 1) - first;
  const { least, most, text } = terminalsOf[row.form];
  const isCountRight = got >= least && got <= most;
  if (isCountRight && table.connectionPort(instance, first) === POSITIONAL) return true;
  const { start, end } = body.wordAt(table.position(instance));
  if (!isCountRight) {
    const count = got === 1 ? '1 connection' : `${got} connections`;
    body.report('gate-arity', `${word} takes ${text}, got ${count}`, start, end);
    return false;
  }
  const message = `the terminals of ${word} have no names; connect them by position`;
  body.report('port-unknown', message, start, end);
  return false;
}

function build(body: ModuleBody, scope: BlockScope, gate: Gate): void {
  const { builder, module } = body;
  const { row, instance, count } = gate;
  const first = module.instances.connectionStart(instance);
  const last = module.instances.connectionStart(instance + 1) - 1;
  const outputCount = terminalsOf[row.form].driven(last - first + 1);
  const single = count === 1 ? simpleTerminals(body, scope, gate, outputCount) : undefined;
  if (single !== undefined) {
    body.buildAt(module.instances.position(instance));
    buildElement(builder, gate, single);
    return;
  }
  const terminals: (readonly NetId[])[] = [];
  for (let connection = first; connection <= last; connection++) {
    const nets = terminalNets(body, scope, gate, connection, connection - first < outputCount);
    if (nets === undefined) return;
    terminals.push(nets);
  }
  body.buildAt(module.instances.position(instance));
  for (let element = 0; element < count; element++) {
    const nets = terminals.map((each) => (each.length === 1 ? each[0]! : each[element]!));
    buildElement(builder, gate, nets);
  }
}

/** The nets of all terminals, the first `outputCount` of which are driven, if these are simple. */
function simpleTerminals(
  body: ModuleBody,
  scope: BlockScope,
  { instance }: Gate,
  outputCount: number,
): readonly NetId[] | undefined {
  const table = body.module.instances;
  const first = table.connectionStart(instance);
  const end = table.connectionStart(instance + 1);
  const nets = new Array<NetId>(end - first);
  for (let connection = first; connection < end; connection++) {
    const net = simpleNet(body, scope, table, connection, connection - first < outputCount);
    if (net === NOT_SIMPLE) return undefined;
    nets[connection - first] = net;
  }
  return nets;
}

const strong: Strengths = { zero: Strength.Strong, one: Strength.Strong };

function buildElement(builder: Recording, { row, strengths }: Gate, nets: readonly NetId[]): void {
  const [first, second, third, fourth] = nets as [NetId, NetId, NetId, NetId];
  switch (row.form) {
    case 'inputs':
      driveGate(builder, first, row.kind, nets.slice(1), strengths);
      break;
    case 'outputs':
      for (const output of nets.slice(0, -1)) {
        driveGate(builder, output, row.kind, nets.slice(-1), strengths);
      }
      break;
    case 'enable': {
      const data = row.isInverted ? inverse(builder, second) : second;
      const control = row.on === 1 ? third : inverse(builder, third);
      builder.busPart(first, data, control, { kind: PartKind.Driver, ...(strengths ?? strong) });
      break;
    }
    case 'switch':
    case 'twoWay': {
      const control = row.on === 1 ? third : inverse(builder, third);
      const kind = row.form === 'switch' ? PartKind.Switch : PartKind.TwoWay;
      builder.busPart(first, second, control, { kind, isResistive: row.isResistive });
      break;
    }
    case 'pair': {
      const control = builder.gate(GateKind.Or, [third, inverse(builder, fourth)]);
      const { isResistive } = row;
      builder.busPart(first, second, control, { kind: PartKind.Switch, isResistive });
      break;
    }
    case 'join':
      builder.join(first, second);
      break;
    case 'pull': {
      const strength = strengths?.[row.kind === GateKind.One ? 'one' : 'zero'] ?? Strength.Pull;
      const traits = { kind: PartKind.Driver, zero: strength, one: strength };
      builder.busPart(first, builder.constant(row.kind), NO_NET, traits);
    }
  }
}

const inverse = (builder: Recording, net: NetId): NetId => builder.gate(GateKind.Not, [net]);

function driveGate(
  builder: Recording,
  output: NetId,
  kind: GateKind,
  inputs: readonly NetId[],
  strengths: Strengths | undefined,
): void {
  if (strengths === undefined) builder.drive(output, kind, inputs);
  else {
    const traits = { kind: PartKind.Driver, ...strengths };
    builder.busPart(output, builder.gate(kind, inputs), NO_NET, traits);
  }
}

/** The nets of a terminal: one, or one for each element of an array of gates. */
function terminalNets(
  body: ModuleBody,
  scope: BlockScope,
  gate: Gate,
  connection: number,
  drives: boolean,
): readonly NetId[] | undefined {
  const table = body.module.instances;
  const simple = simpleNet(body, scope, table, connection, drives);
  if (simple !== NOT_SIMPLE) return [simple];
  const expression = connectionExpression(body, table, connection);
  if (expression === undefined) {
    const { start, end } = body.wordAt(table.position(gate.instance));
    const place = connection - table.connectionStart(gate.instance) + 1;
    body.report('gate-arity', `terminal ${place} of ${gate.word} is empty`, start, end);
    return undefined;
  }
  const nets = drives ? drivenNets(body, scope, expression) : readNets(body, scope, expression);
  return nets && fitted(body, { nets, width: 1, count: gate.count, port: gate.word, expression });
}
