import { GateKind } from '../../../circuit/gates.js';
import type { NetId } from '../../../circuit/ids.js';
import { builtinGates, POSITIONAL } from '../instances.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { evaluateRange } from './constants.js';
import { fitted } from './fitting.js';
import { connectionExpression, drivenNets, NOT_SIMPLE, readNets, simpleNet } from './terminals.js';

type GateWord = (typeof builtinGates)[number];

/** How a built-in gate becomes part of the circuit. */
type GateRow =
  /** One output and then any number of inputs (IEEE 1364-2005, clause 7.2). */
  | { readonly form: 'inputs'; readonly kind: GateKind }
  /** Any number of outputs and then one input (clause 7.3). */
  | { readonly form: 'outputs'; readonly kind: GateKind }
  /** Two terminals that are one net (clause 7.6). */
  | { readonly form: 'join' }
  /** One terminal that is this constant where nothing drives it (clause 7.8). */
  | { readonly form: 'pull'; readonly kind: GateKind }
  | { readonly form: 'refused'; readonly reason: string };

const inputs = (kind: GateKind): GateRow => ({ form: 'inputs', kind });
const outputs = (kind: GateKind): GateRow => ({ form: 'outputs', kind });
const refused = (reason: string): GateRow => ({ form: 'refused', reason });
const triState = refused('its output can be z; use a multiplexer, or and-or logic, in its place');
const switchGate = refused('switches are below the level of gates; use gates in its place');

const gateRows: Readonly<Record<GateWord, GateRow>> = {
  and: inputs(GateKind.And),
  nand: inputs(GateKind.Nand),
  or: inputs(GateKind.Or),
  nor: inputs(GateKind.Nor),
  xor: inputs(GateKind.Xor),
  xnor: inputs(GateKind.Xnor),
  buf: outputs(GateKind.Buf),
  not: outputs(GateKind.Not),
  bufif0: triState,
  bufif1: triState,
  notif0: triState,
  notif1: triState,
  nmos: switchGate,
  pmos: switchGate,
  cmos: switchGate,
  rnmos: switchGate,
  rpmos: switchGate,
  rcmos: switchGate,
  tran: { form: 'join' },
  rtran: { form: 'join' },
  tranif0: switchGate,
  tranif1: switchGate,
  rtranif0: switchGate,
  rtranif1: switchGate,
  pullup: { form: 'pull', kind: GateKind.One },
  pulldown: { form: 'pull', kind: GateKind.Zero },
};

/** Builds a built-in gate, or an array of them. */
export function connectGate(body: ModuleBody, scope: BlockScope, instance: number): void {
  const table = body.module.instances;
  const word = builtinGates[-1 - table.module(instance)]!;
  const row = gateRows[word];
  const position = table.position(instance);
  const { start, end } = body.wordAt(position);
  const extras = table.extras(instance);
  if (row.form === 'refused') {
    body.report('not-supported', `${word} is not supported: ${row.reason}`, start, end);
    return;
  }
  const { strength } = extras ?? {};
  if (strength?.zero === 'highz' || strength?.one === 'highz') {
    const message = `${word} with strength highz is not supported: its output can be z`;
    body.report('not-supported', message, start, end);
    return;
  }
  const range = extras?.range && evaluateRange(extras.range, scope);
  if (extras?.range !== undefined && range === undefined) return;
  const gate = { word, row, instance, count: range ? Math.abs(range.msb - range.lsb) + 1 : 1 };
  if (!checkTerminals(body, gate)) return;
  build(body, scope, gate);
}

interface Gate {
  readonly word: GateWord;
  readonly row: Exclude<GateRow, { form: 'refused' }>;
  readonly instance: number;
  /** Number of elements of an array of gates, else 1. */
  readonly count: number;
}

const terminalCounts = {
  inputs: { least: 2, most: Number.MAX_VALUE, text: 'an output and at least one input' },
  outputs: { least: 2, most: Number.MAX_VALUE, text: 'at least one output and an input' },
  join: { least: 2, most: 2, text: 'two terminals' },
  pull: { least: 1, most: 1, text: 'one terminal' },
} as const;

function checkTerminals(body: ModuleBody, { word, row, instance }: Gate): boolean {
  const table = body.module.instances;
  const first = table.connectionStart(instance);
  const got = table.connectionStart(instance + 1) - first;
  const { start, end } = body.wordAt(table.position(instance));
  const { least, most, text } = terminalCounts[row.form];
  if (got < least || got > most) {
    body.report('gate-arity', `${word} takes ${text}, got ${got} connections`, start, end);
    return false;
  }
  if (table.connectionPort(first) === POSITIONAL) return true;
  const message = `the terminals of ${word} have no names; connect them by position`;
  body.report('port-unknown', message, start, end);
  return false;
}

function build(body: ModuleBody, scope: BlockScope, gate: Gate): void {
  const { builder, module } = body;
  const { row, instance, count } = gate;
  const first = module.instances.connectionStart(instance);
  const last = module.instances.connectionStart(instance + 1) - 1;
  const outputCount = row.form === 'outputs' ? last - first : row.form === 'inputs' ? 1 : 2;
  const terminals: (readonly NetId[])[] = [];
  for (let connection = first; connection <= last; connection++) {
    const nets = terminalNets(body, scope, gate, connection, connection - first < outputCount);
    if (nets === undefined) return;
    terminals.push(nets);
  }
  body.buildAt(module.instances.position(instance));
  for (let element = 0; element < count; element++) {
    const nets = terminals.map((each) => (each.length === 1 ? each[0]! : each[element]!));
    if (row.form === 'inputs') builder.drive(nets[0]!, row.kind, nets.slice(1));
    else if (row.form === 'join') builder.join(nets[0]!, nets[1]!);
    else if (row.form === 'pull') body.pulls.set(nets[0]!, row.kind);
    else for (const output of nets.slice(0, -1)) builder.drive(output, row.kind, nets.slice(-1));
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
