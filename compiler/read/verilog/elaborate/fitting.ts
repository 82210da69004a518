import type { NetId } from '../../../circuit/ids.js';
import type { Expression } from '../syntax.js';
import type { ModuleBody } from './body.js';

/** A connection and what it goes to. */
export interface Fit {
  /** The nets of the connection, least significant first. */
  readonly nets: readonly NetId[];
  /** Bits of the port, and number of instances in the array (1 for a single one). */
  readonly width: number;
  readonly count: number;
  /** What the port is called in messages. */
  readonly port: string;
  readonly expression: Expression;
}

/**
 * Matches the width of a connection with that of the port: an array of instances takes either the
 * bits of one port, which go to all, or those of all ports, the rightmost instance the rightmost
 * ones (IEEE 1364-2005, clause 7.1.6). Surplus bits are cut with a warning; missing ones are left
 * to the caller. Undefined after an error.
 */
export function fitted(body: ModuleBody, fit: Fit): readonly NetId[] | undefined {
  const { nets, width, count, port, expression } = fit;
  const { start, end } = expression;
  if (nets.length === width || nets.length === width * count) return nets;
  if (count > 1) {
    if (isUnsized(expression)) return nets.slice(0, width);
    const message =
      `${port} in an array of ${count} takes ${width} or ${width * count} bits, ` +
      `its connection has ${nets.length}`;
    body.report('range-invalid', message, start, end);
    return undefined;
  }
  if (!isUnsized(expression)) {
    const outcome = nets.length > width ? 'the upper ones are cut' : 'the upper ones are missing';
    const message = `${port} has ${bits(width)}, its connection ${bits(nets.length)}; ${outcome}`;
    body.report('width-mismatch', message, start, end);
  }
  return nets.slice(0, width);
}

const bits = (count: number): string => (count === 1 ? '1 bit' : `${count} bits`);

/** Whether the width of an expression comes from a number that was written without one. */
function isUnsized(expression: Expression): boolean {
  const pending: Expression[] = [expression];
  for (let node = pending.pop(); node !== undefined; node = pending.pop()) {
    if (node.kind === 'number' && node.width === undefined) return true;
    if (node.kind === 'unary') pending.push(node.operand);
    else if (node.kind === 'binary') pending.push(node.right, node.left);
    else if (node.kind === 'conditional') pending.push(node.whenFalse, node.whenTrue);
  }
  return false;
}
