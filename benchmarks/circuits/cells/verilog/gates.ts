import { primitiveName } from '../cell.js';
import type { Expression, Operator } from '../expression.js';

/** A net's wires and the gates that drive it, as lines of a module. */
export interface Gates {
  readonly wires: readonly string[];
  readonly lines: readonly string[];
}

/** The primitive that stands for the operator `mux`. */
export const mux2Primitive = primitiveName('mux2');

/** Gates that drive `output` with a function; its inner wires begin with `output`. */
export function gatesFor(output: string, given: Expression): Gates {
  const wires: string[] = [];
  const lines: string[] = [];
  const drive = (target: string, part: Expression): void => {
    if (part === '0' || part === '1') {
      lines.push(`${part === '0' ? 'pulldown' : 'pullup'} (${target});`);
      return;
    }
    const [operator, ...operands] = typeof part === 'string' ? (['buf', part] as const) : part;
    const terminals = operands.map((operand) => {
      if (typeof operand === 'string') return operand;
      const wire = `${output}_${wires.length}`;
      wires.push(wire);
      drive(wire, operand);
      return wire;
    });
    const gate = operator === 'mux' ? mux2Primitive : operator;
    lines.push(`${gate} (${[target, ...terminals].join(', ')});`);
  };
  drive(output, given);
  return { wires, lines };
}

const signs: Readonly<Record<Exclude<Operator, 'buf' | 'not' | 'mux'>, string>> = {
  and: ' & ',
  nand: ' & ',
  or: ' | ',
  nor: ' | ',
  xor: ' ^ ',
  xnor: ' ^ ',
};

/** A function as the right side of an assignment. */
export function assigned(given: Expression): string {
  if (given === '0' || given === '1') return `1'b${given}`;
  if (typeof given === 'string') return given;
  const [operator, ...operands] = given;
  const texts = operands.map((operand) =>
    typeof operand === 'string' ? assigned(operand) : `(${assigned(operand)})`,
  );
  if (operator === 'buf') return texts[0]!;
  if (operator === 'not') return `~${texts[0]}`;
  if (operator === 'mux') return `${texts[0]} ? ${texts[2]} : ${texts[1]}`;
  const joined = texts.join(signs[operator]);
  return operator.startsWith('n') || operator === 'xnor' ? `~(${joined})` : joined;
}
