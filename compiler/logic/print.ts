import { type Literal, type Logic, LogicOp } from './logic.js';

/**
 * A logic graph as text, a node a line: `n4 = and n2 ~n3`. For tests, bug reports and the debug
 * output of the passes.
 */
export function printLogic(logic: Logic): string {
  const lines: string[] = [];
  for (let node = 1; node < logic.nodeCount; node++) lines.push(`n${node} = ${body(logic, node)}`);
  logic.outputs.forEach((literal, bit) => {
    lines.push(`output ${bit} = ${name(literal)}`);
  });
  logic.next.forEach((literal, bit) => {
    const { role, index } = logic.states[bit]!;
    lines.push(`state ${bit} (${role} ${index}) = ${name(literal)}`);
  });
  for (const write of logic.writes) {
    const { memory, enable, address, data } = write;
    const [at, what] = [address, data].map((bits) => bits.map(name).join(' '));
    lines.push(`write memory ${memory} if ${name(enable)} at ${at} of ${what}`);
  }
  for (const { when, message } of logic.faults) lines.push(`fault ${name(when)}: ${message}`);
  return lines.join('\n');
}

function body({ op, a, b, c }: Logic, node: number): string {
  const [first, second, third] = [name(a[node]!), name(b[node]!), name(c[node]!)];
  switch (op[node]) {
    case LogicOp.Input:
      return `input ${a[node]}`;
    case LogicOp.State:
      return `state ${a[node]}`;
    case LogicOp.And:
      return `and ${first} ${second}`;
    case LogicOp.Xor:
      return `xor ${first} ${second}`;
    case LogicOp.Pack:
      return `pack ${first} ${second}`;
    case LogicOp.Load:
      return `load memory ${c[node]} ${first} ${second}`;
    case LogicOp.Bit:
      return `bit ${c[node]} ${first}`;
    default:
      return `mux ${first} ${second} ${third}`;
  }
}

function name(literal: Literal): string {
  if (literal < 2) return String(literal);
  return `${literal & 1 ? '~' : ''}n${literal >>> 1}`;
}
