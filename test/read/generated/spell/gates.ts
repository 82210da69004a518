import type { Operation, Operator } from '../design/model.js';
import type { ItemContext } from './context.js';
import { indexOf } from './expressions.js';

/** The gate that does to each bit what an operator does to a word. */
const bitWords: Partial<Record<Operator, string>> = {
  copy: 'buf',
  not: 'not',
  and: 'and',
  or: 'or',
  xor: 'xor',
  xnor: 'xnor',
};

/** The gate that all bits of a word go into. */
const foldWords: Partial<Record<Operator, string>> = {
  allOf: 'and',
  notAllOf: 'nand',
  anyOf: 'or',
  noneOf: 'nor',
  parity: 'xor',
  notParity: 'xnor',
  logicalNot: 'nor',
};

const gateWords: Partial<Record<Operator, string>> = {
  gateAnd: 'and',
  gateNand: 'nand',
  gateOr: 'or',
  gateNor: 'nor',
  gateXor: 'xor',
  gateXnor: 'xnor',
  gateBuf: 'buf',
  gateNot: 'not',
};

/** A gate word with strength and delay, which say nothing here. */
function decorated({ choices }: ItemContext, word: string): string {
  return choices.of('styles', [
    word,
    `${word} #1`,
    `${word} #(1, 2)`,
    `${word} (strong0, strong1)`,
    `${word} (supply1, supply0) #(1:2:3)`,
  ]);
}

/** The name of an instance, or none. */
const instanceName = (context: ItemContext): string =>
  context.choices.pick('styles', 2) === 0 ? '' : `${context.fresh('g')} `;

/** An array of gates, one for each bit (clause 7.1.5). */
export function arrayGate(context: ItemContext, operation: Operation): string | undefined {
  const word = bitWords[operation.operator];
  if (word === undefined || operation.target.isPort) return undefined;
  const { width } = operation.target;
  const [left, right] = context.choices.of('styles', [
    [width - 1, 0],
    [0, width - 1],
    [3, width + 2],
  ]);
  const range = `[${context.writer.integer(left!)}:${context.writer.integer(right!)}]`;
  const operands = operation.pieces.map((piece) => context.writer.piece(piece));
  const terminals = [context.name(operation.target), ...operands].join(', ');
  return `${decorated(context, word)} ${context.fresh('g')} ${range} (${terminals});`;
}

/** A gate for each bit, several in one statement. */
export function bitGates(context: ItemContext, operation: Operation): string | undefined {
  const word = bitWords[operation.operator];
  const { target, pieces } = operation;
  if (word === undefined || !context.areNamed(pieces)) return undefined;
  const operands = pieces.map((piece) => context.bits(piece));
  const gates = Array.from({ length: target.width }, (_, i) => {
    const terminals = [context.writer.bit(target, i), ...operands.map((bits) => bits[i]!)];
    return `${instanceName(context)}(${terminals.join(', ')})`;
  });
  return `${decorated(context, word)} ${gates.join(', ')};`;
}

/** One gate that all bits go into. */
export function foldedGate(context: ItemContext, operation: Operation): string | undefined {
  const word = foldWords[operation.operator];
  if (word === undefined || !context.areNamed(operation.pieces)) return undefined;
  const terminals = [context.name(operation.target), ...context.bits(operation.pieces[0]!)];
  return `${decorated(context, word)} ${instanceName(context)}(${terminals.join(', ')});`;
}

/** A gate, which may drive a second output that nothing reads. */
export function singleGate(context: ItemContext, operation: Operation): string | undefined {
  const word = gateWords[operation.operator];
  if (word === undefined) return undefined;
  const operands = operation.pieces.map((piece) => context.writer.piece(piece));
  const isBuffer = word === 'buf' || word === 'not';
  const spare = isBuffer && context.choices.pick('styles', 2) === 1 ? [context.fresh('n')] : [];
  const declaration = spare.map((name) => `wire ${name};\n  `).join('');
  const terminals = [context.name(operation.target), ...spare, ...operands].join(', ');
  return `${declaration}${decorated(context, word)} ${instanceName(context)}(${terminals});`;
}

const signs: Partial<Record<Operator, string>> = { and: '&', or: '|', xor: '^', xnor: '~^' };

/** A loop over the bits (clause 12.4.1). */
export function generateLoop(context: ItemContext, operation: Operation): string | undefined {
  const { operator, target, pieces } = operation;
  const word = bitWords[operator];
  const isPlain = pieces.every(({ zeros, signal }) => zeros === 0 && signal.isVector);
  if (word === undefined || !isPlain || !target.isVector || !context.areNamed(pieces)) {
    return undefined;
  }
  const { choices } = context;
  const at = context.fresh('i');
  const to = `${context.name(target)}[${steppedIndex(target, 0, at)}]`;
  const operands = pieces.map(({ signal, low }) => {
    return `${context.name(signal)}[${steppedIndex(signal, low, at)}]`;
  });
  const before = operator === 'not' ? '~' : '';
  const value = before + operands.join(` ${signs[operator] ?? ''} `);
  const body = choices.of('styles', [
    `assign ${to} = ${value};`,
    `${word} (${[to, ...operands].join(', ')});`,
    `if (${at} >= 0) begin ${word} (${[to, ...operands].join(', ')}); end else begin end`,
  ]);
  const head = `for (${at} = 0; ${at} < ${target.width}; ${at} = ${at} + 1)`;
  const loop = `${head} begin : ${context.fresh('l')} ${body} end`;
  return choices.of('styles', [
    `genvar ${at};\n  generate ${loop} endgenerate`,
    `genvar ${at};\n  ${loop}`,
    `generate genvar ${at}; ${loop} endgenerate`,
  ]);
}

function steppedIndex(signal: Operation['target'], low: number, step: string): string {
  const start = indexOf(signal, low);
  return signal.lsb <= signal.msb ? `${step} + (${start})` : `${start} - ${step}`;
}

/** A net that is one with an input port. */
export function joinedNets(context: ItemContext, operation: Operation): string | undefined {
  const { operator, target, pieces } = operation;
  const [piece] = pieces;
  if (operator !== 'copy' || target.isPort || target.width > 1 || piece!.zeros > 0)
    return undefined;
  if (piece!.signal.role !== 'input' || !context.areNamed(pieces)) return undefined;
  const nets = `${context.name(target)}, ${context.bits(piece!)[0]}`;
  return context.choices.of('styles', [
    `tran (${nets});`,
    `rtran (${nets});`,
    `tranif1 (${nets}, 1'b1);`,
    `rtranif0 (${nets}, 1'b0);`,
  ]);
}

/** A net whose type gives it its value. */
export function constantNet(context: ItemContext, operation: Operation): string | undefined {
  const { operator, target, value } = operation;
  const isOnes = value === 2 ** target.width - 1;
  if (operator !== 'constant' || target.isPort || (value !== 0 && !isOnes)) return undefined;
  context.netTypes.set(
    target,
    context.choices.of('styles', isOnes ? ['supply1', 'tri1'] : ['supply0', 'tri0']),
  );
  return ';';
}
