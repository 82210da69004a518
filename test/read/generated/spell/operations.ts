import type { Operation, Operator } from '../design/model.js';
import { spellBus } from './buses.js';
import type { ItemContext } from './context.js';
import {
  arrayGate,
  bitGates,
  constantNet,
  foldedGate,
  generateLoop,
  joinedNets,
  singleGate,
} from './gates.js';
import { cell } from './helpers.js';

/** One way to write an operation; undefined where it cannot be written so. */
export type Form = (context: ItemContext, operation: Operation) => string | undefined;

const busOperators: readonly Operator[] = ['bus', 'wiredAnd', 'wiredOr', 'pulledUp', 'pulledDown'];

/** Forms for any operation, the plainest first, and forms that only some operations have. */
const anyForms: readonly Form[] = [
  assign,
  declaredAssign,
  always,
  functionCall,
  taskCall,
  splitTarget,
];
const ownForms: readonly Form[] = [
  branches,
  arrayGate,
  bitGates,
  foldedGate,
  singleGate,
  generateLoop,
  joinedNets,
  constantNet,
  cell,
];

/** The text of an operation that is not written inside of others. */
export function spellOperation(context: ItemContext, operation: Operation): string {
  const { choices } = context;
  if (busOperators.includes(operation.operator)) return spellBus(context, operation);
  if (choices.pick('forms', 3) > 0) {
    const start = choices.pick('forms', ownForms.length);
    for (const form of [...ownForms.slice(start), ...ownForms.slice(0, start)]) {
      const text = form(context, operation);
      if (text !== undefined) return text;
    }
  }
  return choices.of('forms', anyForms)(context, operation) ?? assign(context, operation);
}

/** The right side of an operation. */
export function valueText({ writer }: ItemContext, operation: Operation): string {
  const { operator, pieces } = operation;
  if (operator === 'bitOf') return writer.bitOf(pieces[0]!.signal, pieces[1]!);
  return writer.expression(operation);
}

function assign(context: ItemContext, operation: Operation): string {
  const { choices } = context;
  const head = choices.of('styles', ['assign', 'assign #1', 'assign (strong0, strong1)']);
  return `${head} ${context.name(operation.target)} = ${valueText(context, operation)};`;
}

function declaredAssign(context: ItemContext, operation: Operation): string | undefined {
  const { target } = operation;
  if (target.isPort) return undefined;
  context.declared.add(target);
  const range = context.writer.range(target);
  return `wire ${range}${context.name(target)} = ${valueText(context, operation)};`;
}

function always(context: ItemContext, operation: Operation): string | undefined {
  const { choices } = context;
  if (!context.canChange(operation.pieces)) return undefined;
  context.variables.add(operation.target);
  const statement = `${context.name(operation.target)} = ${valueText(context, operation)};`;
  const events = choices.of('styles', ['@*', '@(*)', '@ *', namesOf(context, operation)]);
  const block = context.fresh('b');
  return choices.of('styles', [
    `always ${events} ${statement}`,
    `always ${events} begin ${statement} end`,
    `always ${events} begin : ${block} ${statement} end`,
    `always ${events} begin begin end #1 ${statement} end`,
  ]);
}

/** An event list with all that an operation reads. */
function namesOf(context: ItemContext, operation: Operation): string {
  const names = new Set<string>();
  const collect = ({ pieces }: Operation): void => {
    for (const { signal } of pieces) {
      const inner = context.writer.inlined.get(signal);
      if (inner !== undefined) collect(inner);
      else if (signal.role !== 'parameter') names.add(context.name(signal));
    }
  };
  collect(operation);
  return `@(${[...names].join(context.choices.of('styles', [' or ', ', ']))})`;
}

/** Declarations of the arguments of a routine, and the arguments of a call. */
function argumentsOf({ writer }: ItemContext, { pieces }: Operation) {
  const names = pieces.map((_, i) => `arg${i}`);
  const types = pieces.map(({ width, zeros }) => {
    return writer.range({ isVector: width + zeros > 1, msb: width + zeros - 1, lsb: 0 });
  });
  return { names, types, actuals: pieces.map((piece) => writer.piece(piece)) };
}

function functionCall(context: ItemContext, operation: Operation): string | undefined {
  const { writer, choices } = context;
  const { operator, pieces, value, target } = operation;
  if (pieces.length === 0 || operator === 'bitOf') return undefined;
  const name = context.fresh('f');
  const { names, types, actuals } = argumentsOf(context, operation);
  const range = writer.range({ isVector: target.width > 1, msb: target.width - 1, lsb: 0 });
  const body = `${name} = ${writer.valueOf(operator, names, value, target.width)};`;
  const list = names.map((each, i) => `input ${types[i]}${each}`);
  const head = choices.of('styles', [
    `function ${range}${name}; ${list.join('; ')};`,
    `function automatic ${range}${name} (${list.join(', ')});`,
  ]);
  const call = `assign ${context.name(target)} = ${name}(${actuals.join(', ')});`;
  return `${head} ${body} endfunction\n  ${call}`;
}

function taskCall(context: ItemContext, operation: Operation): string | undefined {
  const { writer } = context;
  const { operator, pieces, value, target } = operation;
  if (operator === 'bitOf' || !context.canChange(pieces)) return undefined;
  context.variables.add(target);
  const name = context.fresh('t');
  const { names, types, actuals } = argumentsOf(context, operation);
  const range = writer.range({ isVector: target.width > 1, msb: target.width - 1, lsb: 0 });
  const list = names.map((each, i) => `input ${types[i]}${each};`);
  const body = `result = ${writer.valueOf(operator, names, value, target.width)};`;
  return (
    `task ${name}; output ${range}result; ${list.join(' ')} begin ${body} end endtask\n` +
    `  always @* ${name}(${[context.name(target), ...actuals].join(', ')});`
  );
}

/** A multiplexer as statements. */
function branches(context: ItemContext, operation: Operation): string | undefined {
  const { choices, writer } = context;
  const { operator, pieces, target } = operation;
  if (operator !== 'mux' || !context.canChange(pieces)) return undefined;
  context.variables.add(target);
  const [select, one, zero] = pieces.map((piece) => writer.piece(piece));
  const to = context.name(target);
  const body = choices.of('styles', [
    `if (${select}) ${to} = ${one}; else ${to} = ${zero};`,
    `begin ${to} = ${zero}; if (${select}) ${to} = ${one}; end`,
    `case (${select}) 1'b1: ${to} = ${one}; default ${to} = ${zero}; endcase`,
    `casez ({${select}, 1'b0}) 2'b1?: ${to} = ${one}; 2'b0?: ${to} = ${zero}; endcase`,
    `case (1'b1) ${select}: ${to} = ${one}; default: ${to} = ${zero}; endcase`,
  ]);
  return `always @* ${body}`;
}

/** The target in two parts. */
function splitTarget(context: ItemContext, operation: Operation): string | undefined {
  const { writer, choices } = context;
  const { target } = operation;
  if (target.width < 2) return undefined;
  const low = 1 + choices.pick('styles', target.width - 1);
  const upper = targetPart(context, operation, low, target.width - low);
  const lower = targetPart(context, operation, 0, low);
  const value = valueText(context, operation);
  if (operation.operator === 'join' && widthOf(operation.pieces[1]!) === low) {
    const [a, b] = operation.pieces.map((piece) => writer.piece(piece));
    return `assign ${upper} = ${a}, ${lower} = ${b};`;
  }
  return `assign {${upper}, ${lower}} = ${value};`;
}

function targetPart({ writer }: ItemContext, { target }: Operation, low: number, width: number) {
  const left = writer.integer(
    target.lsb <= target.msb ? target.lsb + low + width - 1 : target.lsb - low - width + 1,
  );
  const right = writer.integer(target.lsb <= target.msb ? target.lsb + low : target.lsb - low);
  const name = writer.id(target.name);
  return width === 1 ? `${name}[${right}]` : `${name}[${left}:${right}]`;
}

const widthOf = ({ width, zeros }: Operation['pieces'][number]): number => width + zeros;
