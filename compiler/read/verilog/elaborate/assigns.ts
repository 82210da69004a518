import { PartKind } from '../../../circuit/busParts.js';
import { GateKind } from '../../../circuit/gates.js';
import { NO_NET } from '../../../circuit/ids.js';
import {
  evaluateConstant,
  isBare,
  lowerAlways,
  lowerExpression,
  lowerIfFloating,
  lowerInitial,
  lowerScalarAssign,
  lowerTarget,
} from '../behaviour/index.js';
import type { Expression } from '../syntax.js';
import type { BlockScope } from './blockScope.js';
import type { Located, ModuleBody } from './body.js';
import { forEachTarget } from './expressions.js';
import { isIdle } from './idleProcesses.js';
import { strengthsOf } from './strengths.js';
import { ensureDeclared } from './terminals.js';

/** Declares the nets that only the left side of an `assign` names (clause 4.5). */
export function declareTargets(body: ModuleBody): void {
  for (const { scope, item } of body.assigns) {
    forEachTarget(item.target, ({ path, start, end }) => {
      if (path.length === 1) ensureDeclared(body, scope, path[0]!, start, end);
    });
  }
}

/** Builds the continuous assignments, those in net declarations first (clause 6.1). */
export function lowerAssigns(body: ModuleBody): void {
  for (const { scope, target, value, strength } of body.netValues) {
    lowerAssign(body, scope, { target, value, strength, start: target.start });
  }
  for (const { scope, item } of body.assigns) lowerAssign(body, scope, item);
}

/** Builds the processes, once all power-up values are known. */
export function lowerProcesses(body: ModuleBody): void {
  for (const { scope, target, value } of body.variableValues) {
    setInitialValue(body, scope, target, value);
  }
  for (const { scope, item } of body.initials) lowerInitial(item, scope);
  for (const process of body.processes) {
    if (isIdle(process, body.module)) continue;
    body.buildAt(process.item.start);
    lowerAlways(process.item, process.scope);
  }
}

type Assign = Pick<Located<'assign'>['item'], 'target' | 'value' | 'strength' | 'start'>;

function lowerAssign(
  body: ModuleBody,
  scope: BlockScope,
  { target, value, strength, start }: Assign,
): void {
  body.buildAt(start);
  const scalar = strength === undefined ? lowerScalarAssign(target, value, scope) : undefined;
  if (scalar !== undefined) {
    if (isBare(value)) body.copies.push(body.builder.driverCount);
    body.builder.drive(scalar.target, GateKind.Buf, [scalar.value]);
    return;
  }
  const targets = lowerTarget(target, scope);
  if (targets === undefined) return;
  const strengths = strengthsOf(strength);
  const floating = lowerIfFloating(value, scope, targets.length);
  if (floating !== undefined) {
    body.buildAt(start);
    for (const [bit, net] of targets.entries()) body.addFloating(net, floating[bit]!, strengths);
    return;
  }
  const values = lowerExpression(value, scope, targets.length);
  // Lowering moves the origin to parts of the value.
  body.buildAt(start);
  const { builder } = body;
  const isCopy = isBare(value);
  for (const [bit, net] of targets.entries()) {
    if (strengths !== undefined) {
      builder.busPart(net, values[bit]!, NO_NET, { kind: PartKind.Driver, ...strengths });
      continue;
    }
    if (isCopy) body.copies.push(builder.driverCount);
    builder.drive(net, GateKind.Buf, [values[bit]!]);
  }
}

/** `reg q = 1;` is short for an `initial` assignment (clause 6.2.1). */
function setInitialValue(
  body: ModuleBody,
  scope: BlockScope,
  target: Expression,
  value: Expression,
): void {
  const constant = evaluateConstant(value, scope);
  const binding = target.kind === 'name' ? scope.resolve(target.path) : undefined;
  if (constant === undefined || binding?.kind !== 'signal') return;
  const { width, signed, unknown } = constant;
  const bits = signed ? BigInt.asIntN(width, constant.value) : constant.value;
  for (const [index, net] of binding.nets.entries()) {
    const place = BigInt(Math.min(index, signed ? width - 1 : index));
    if (((unknown >> place) & 1n) === 1n) continue;
    body.initialValues.set(net, ((bits >> BigInt(index)) & 1n) === 1n ? 1 : 0);
  }
}
