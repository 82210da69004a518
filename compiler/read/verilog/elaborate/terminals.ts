import type { NetId } from '../../../circuit/ids.js';
import { netId } from '../../../circuit/ids.js';
import { lowerExpression, lowerTarget } from '../behaviour/index.js';
import { ConnectionKind, type InstanceTable } from '../instances.js';
import type { Expression } from '../syntax.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { declareImplicit } from './declarations.js';
import { forEachName, forEachTarget } from './expressions.js';

/** What a connection gives where it is no single net that can be told at once. */
export const NOT_SIMPLE = -1;

/**
 * The net of a connection that is a scalar or a bit of a vector, which most are; `NOT_SIMPLE`
 * otherwise. `drives` tells that the connection is driven, which no variable may be.
 */
export function simpleNet(
  body: ModuleBody,
  scope: BlockScope,
  table: InstanceTable,
  connection: number,
  drives: boolean,
): NetId | typeof NOT_SIMPLE {
  const kind = table.connectionKind(connection);
  if (kind !== ConnectionKind.Name && kind !== ConnectionKind.Bit) return NOT_SIMPLE;
  const name = table.connectionFirst(connection);
  const scalar = kind === ConnectionKind.Name ? scope.symbols.scalar(name, drives) : -1;
  if (scalar >= 0) return netId(scalar);
  const owner = scope.owner(name) ?? implicitOwner(body, scope, table, connection);
  if (owner === undefined) return NOT_SIMPLE;
  const index = kind === ConnectionKind.Bit ? table.connectionSecond(connection) : undefined;
  const net = owner.netOf(name, index, drives);
  return net < 0 ? NOT_SIMPLE : netId(net);
}

/** A connection as an expression, whichever way it is stored; undefined where it is empty. */
export function connectionExpression(
  body: ModuleBody,
  table: InstanceTable,
  connection: number,
): Expression | undefined {
  const kind = table.connectionKind(connection);
  const first = table.connectionFirst(connection);
  if (kind === ConnectionKind.Empty) return undefined;
  if (kind === ConnectionKind.Expression) return table.expressions[first];
  const { start, end } = body.wordAt(table.connectionPosition(connection));
  const name = { kind: 'name', path: [first], start, end } as const;
  if (kind === ConnectionKind.Name) return name;
  const value = BigInt(table.connectionSecond(connection));
  const bits = { value, unknown: 0n, highZ: 0n, extends: 'zero' } as const;
  const index = { kind: 'number', width: undefined, signed: true, ...bits, start, end } as const;
  return { kind: 'select', base: name, index, start, end };
}

/** The nets that a connection drives, implicit ones declared; undefined after a report. */
export function drivenNets(
  body: ModuleBody,
  scope: BlockScope,
  expression: Expression,
): readonly NetId[] | undefined {
  forEachTarget(expression, ({ path, start, end }) => {
    if (path.length === 1) ensureDeclared(body, scope, path[0]!, start, end);
  });
  return lowerTarget(expression, scope);
}

/** The nets of a value that a connection reads, implicit ones declared. */
export function readNets(
  body: ModuleBody,
  scope: BlockScope,
  expression: Expression,
  width?: number,
): readonly NetId[] {
  forEachName(expression, ({ path, start, end }) => {
    if (path.length === 1) ensureDeclared(body, scope, path[0]!, start, end);
  });
  body.buildAt(expression.start);
  return lowerExpression(expression, scope, width);
}

/** Declares a name that is unknown as an implicit net, if `default_nettype` allows it. */
export function ensureDeclared(
  body: ModuleBody,
  scope: BlockScope,
  name: number,
  start: number,
  end: number,
): void {
  // Without implicit nets, whoever resolves the name reports it.
  if (body.module.defaultNetType === undefined || scope.owner(name) !== undefined) return;
  declareImplicit(body, scope, name, start, end);
}

function implicitOwner(
  body: ModuleBody,
  scope: BlockScope,
  table: InstanceTable,
  connection: number,
): BlockScope | undefined {
  if (body.module.defaultNetType === undefined) return undefined;
  const { start, end } = body.wordAt(table.connectionPosition(connection));
  declareImplicit(body, scope, table.connectionFirst(connection), start, end);
  return scope;
}
