import type { Operation, Signal } from '../design/model.js';
import type { ItemContext } from './context.js';

/**
 * A net that several drivers share: those of `bus` drive it in turn, those of the wired ones
 * together, and a pull gives it a value where nothing else does.
 */
export function spellBus(context: ItemContext, operation: Operation): string {
  const { choices, writer } = context;
  const { operator, target, pieces } = operation;
  const texts = pieces.map((piece) => writer.piece(piece));
  if (operator === 'wiredAnd' || operator === 'wiredOr') return wired(context, operation, texts);
  const [select, one, zero = ''] = texts as [string, string, string];
  const isBus = operator === 'bus';
  const driven = drivers(context, target, select, one, isBus);
  if (isBus) {
    const other = drivers(context, target, `!${select}`, zero, true);
    return `${driven}\n  ${other}`;
  }
  const isUp = operator === 'pulledUp';
  const useType = choices.pick('forms', 2) === 1;
  if (useType && !target.isPort) {
    context.netTypes.set(target, isUp ? 'tri1' : 'tri0');
    return driven;
  }
  const bits = Array.from({ length: target.width }, (_, i) => writer.bit(target, i));
  const gates = bits.map((bit) => `(${bit})`).join(', ');
  return `${driven}\n  ${isUp ? 'pullup' : 'pulldown'} ${gates};`;
}

function wired(context: ItemContext, { operator, target }: Operation, texts: readonly string[]) {
  const { choices } = context;
  const [type, other] = operator === 'wiredAnd' ? ['wand', 'triand'] : ['wor', 'trior'];
  context.netTypes.set(target, choices.of('styles', [type!, other!]));
  const name = context.name(target);
  return choices.of('styles', [
    texts.map((text) => `assign ${name} = ${text};`).join('\n  '),
    `assign ${texts.map((text) => `${name} = ${text}`).join(', ')};`,
  ]);
}

/** Drives a net by a value while a bit is 1; weakly too where `isAlone` tells that it may. */
function drivers(
  context: ItemContext,
  target: Signal,
  select: string,
  value: string,
  isAlone: boolean,
): string {
  const { choices, writer } = context;
  const { width } = target;
  const name = context.name(target);
  const range = writer.range({ isVector: width > 1, msb: width - 1, lsb: 0 });
  const gate = (word: string, ...terminals: readonly string[]): string =>
    `${word} ${context.fresh('d')} ${range}(${[name, ...terminals].join(', ')});`;
  return choices.of('forms', [
    `assign ${name} = ${select} ? ${value} : ${width}'bz;`,
    gate('bufif1', value, select),
    gate('bufif0', value, `~(${select})`),
    gate('notif1', `~(${value})`, select),
    gate('notif0', `~(${value})`, `!(${select})`),
    gate('nmos', value, select),
    gate('pmos', value, `~(${select})`),
    gate('cmos', value, select, `~(${select})`),
    ...(isAlone ? [gate('rnmos', value, select)] : []),
    `assign ${name} = !(${select}) ? {${width}{1'bz}} : ${value};`,
  ]);
}
