import type { Instance, Signal } from '../design/model.js';
import type { ItemContext } from './context.js';
import { indexOf } from './expressions.js';

/** The text of an instance, or of an array of them. */
export function spellInstance(context: ItemContext, instance: Instance): string {
  const { choices } = context;
  const isSplit = instance.count > 1 && choices.pick('forms', 2) === 1;
  const isNamed = canBeSplit(context, instance);
  if (!isSplit || !isNamed) return whole(context, instance);
  return Array.from({ length: instance.count }, (_, i) => element(context, instance, i)).join(
    '\n  ',
  );
}

const canBeSplit = (context: ItemContext, { inputs }: Instance): boolean =>
  context.areNamed(inputs);

function whole(context: ItemContext, instance: Instance): string {
  const { count, inputs, targets, name } = instance;
  const range =
    count === 1 ? '' : ` [${context.writer.integer(count - 1)}:${context.writer.integer(0)}]`;
  const values = inputs.map((piece) => context.writer.piece(piece));
  const outputs = targets.map((target) => context.name(target));
  return written(context, instance, name, range, values, outputs);
}

/** One element of an array, under the name that it has in the array. */
function element(context: ItemContext, instance: Instance, index: number): string {
  const { module, inputs, targets, name } = instance;
  const values = inputs.map((piece, i) => {
    const { width } = module.inputs[i]!;
    const isShared = piece.width + piece.zeros === width;
    const bits = context.bits(piece);
    const own = isShared ? bits : bits.slice(index * width, (index + 1) * width);
    return `{${own.toReversed().join(', ')}}`;
  });
  const outputs = targets.map((target, i) => {
    const { width } = module.outputs[i]!;
    return targetPart(context, target, index * width, width);
  });
  return written(context, instance, `${name}[${index}]`, '', values, outputs);
}

function targetPart({ writer }: ItemContext, target: Signal, low: number, width: number): string {
  if (width === 1) return writer.bit(target, low);
  const left = indexOf(target, low + width - 1);
  return `${writer.id(target.name)}[${left}:${indexOf(target, low)}]`;
}

function written(
  context: ItemContext,
  { module, parameter }: Instance,
  name: string,
  range: string,
  inputs: readonly string[],
  outputs: readonly string[],
): string {
  const { choices, writer } = context;
  const own = context.module;
  const ports = [module.clock, module.reset, ...module.inputs, ...module.outputs];
  const nets = [context.name(own.clock), context.name(own.reset), ...inputs, ...outputs];
  const pins = ports.map((port, i) => `.${writer.id(port.name)}(${nets[i]})`);
  const connections = choices.of('styles', [nets, pins, pins.toReversed()]).join(', ');
  const value = parameter === undefined ? '' : writer.number(parameter, 4);
  const isElement = range === '' && parameter !== undefined;
  const head = `${module.name} `;
  const body = `${writer.id(name)}${range} (${connections});`;
  if (parameter === undefined) return head + body;
  return choices.of('styles', [
    `${head}#(.K(${value})) ${body}`,
    `${head}#(${value}) ${body}`,
    isElement
      ? `${head}${body} defparam ${writer.id(name)}.K = ${value};`
      : `${head}#(${value}) ${body}`,
  ]);
}
