import { FALSE, type Logic, LogicOp, UPDATE_WIDTH } from './logic.js';
import { sinksOf } from './sinks.js';

/**
 * Throws an Error where a logic graph breaks its own rules: operands before users, indexes within
 * bounds, one next value for each state bit. Run after each pass by tests.
 */
export function checkLogic(logic: Logic): void {
  const { nodeCount, op, a, b, c, inputCount, states, next, updates } = logic;
  const fail = (node: number, what: string): never => {
    throw new Error(`logic node ${node}: ${what}`);
  };
  if (op[0] !== LogicOp.Zero) fail(0, 'is not the constant');
  for (let node = 1; node < nodeCount; node++) {
    const kind = op[node]!;
    if (kind === LogicOp.Zero) fail(node, 'is a second constant');
    if (kind === LogicOp.Input && a[node]! >= inputCount) fail(node, `reads input ${a[node]}`);
    if (kind === LogicOp.State && a[node]! >= states.length) fail(node, `reads state ${a[node]}`);
    if (kind < LogicOp.And) continue;
    const operands = kind === LogicOp.Mux ? [a, b, c] : [a, b];
    for (const column of operands) {
      if (column[node]! >>> 1 >= node) fail(node, `reads node ${column[node]! >>> 1}`);
    }
    checkWord(logic, node, fail);
    if (kind === LogicOp.Xor && (a[node]! | b[node]!) & 1) fail(node, 'has an inverted operand');
    if (kind === LogicOp.Mux && a[node]! & 1) fail(node, 'has an inverted select');
  }
  if (next.length !== states.length) fail(0, `${next.length} next of ${states.length} states`);
  for (const literal of sinksOf(logic)) {
    if (literal >>> 1 >= nodeCount) fail(literal >>> 1, 'is a sink and missing');
  }
  for (const { first, from } of updates) {
    if (first + UPDATE_WIDTH > states.length)
      fail(0, `an update goes beyond state ${states.length}`);
    if (from + UPDATE_WIDTH > states.length) fail(0, `an update copies from state ${from}`);
  }
}

// Words and numbers are read by nodes of their kind alone, and these read nothing else.
function checkWord(
  { op, a, b, c }: Logic,
  node: number,
  fail: (node: number, what: string) => never,
): void {
  const kind = op[node]!;
  const isWordy = (literal: number): boolean =>
    op[literal >>> 1] === LogicOp.Pack || op[literal >>> 1] === LogicOp.Load;
  const reads = (literal: number, wanted: number): boolean =>
    literal === FALSE || (op[literal >>> 1] === wanted && (literal & 1) === 0);
  if (kind === LogicOp.Pack) {
    if (isWordy(a[node]!)) fail(node, 'takes a word for a bit');
    if (!reads(b[node]!, LogicOp.Pack)) fail(node, 'continues no number');
  } else if (kind === LogicOp.Load) {
    if (!reads(a[node]!, LogicOp.Pack)) fail(node, 'has no number for an address');
    if (isWordy(b[node]!)) fail(node, 'takes a word for a bit');
  } else if (kind === LogicOp.Bit) {
    if (op[a[node]! >>> 1] !== LogicOp.Load || b[node] !== FALSE) fail(node, 'reads no word');
  } else if ([a[node]!, b[node]!, ...(kind === LogicOp.Mux ? [c[node]!] : [])].some(isWordy)) {
    fail(node, 'takes a word for a bit');
  }
}
