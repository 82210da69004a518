import type { Control, Latch, Register } from '../design/model.js';
import type { ItemContext } from './context.js';
import { indexOf } from './expressions.js';
import { flopCell, latchTable } from './helpers.js';

/** The text of a register, its power-up value included. */
export function spellRegister(context: ItemContext, register: Register): string {
  const form = context.choices.pick('forms', 6);
  if (form > 3) {
    const text = flopCell(context, register);
    if (text !== undefined) return text;
  }
  context.variables.add(register.target);
  const initial = initialText(context, register);
  if (form === 3 && context.areNamed(piecesOf(register))) {
    return `${initial}${bitLoop(context, register)}`;
  }
  const head = `always ${events(context, register)}`;
  const target = context.name(register.target);
  const data = context.writer.piece(register.data);
  return `${initial}${context.choices.of('forms', [
    `${head} ${statement(context, register, target, data)}`,
    `${head} begin ${statement(context, register, target, data)} end`,
    named(context, register, head),
  ])}`;
}

const piecesOf = ({ data, enable, clear }: Register) =>
  [data, enable, clear?.by].filter((piece) => piece !== undefined);

function initialText(context: ItemContext, { target, initial }: Register): string {
  if (initial === undefined) return '';
  const value = context.writer.number(initial, target.width);
  const name = context.name(target);
  if (context.choices.pick('styles', 4) === 3) {
    context.initialValues.set(target, value);
    return '';
  }
  return context.choices.of('styles', [
    `initial ${name} = ${value};\n  `,
    `initial begin ${name} = ${value}; end\n  `,
    `initial ${name} <= #0 ${value};\n  `,
  ]);
}

/** `@(posedge clk or negedge rst[0])`, in any order. */
function events(context: ItemContext, { isFalling, controls }: Register): string {
  const { choices, module, writer } = context;
  const clock = `${isFalling ? 'negedge' : 'posedge'} ${context.name(module.clock)}`;
  const edges = controls.map(({ bit, level }) => {
    return `${level === 1 ? 'posedge' : 'negedge'} ${writer.bit(module.reset, bit)}`;
  });
  const list = choices.pick('styles', 2) === 1 ? [...edges, clock] : [clock, ...edges];
  return `@(${list.join(choices.of('styles', [' or ', ', ']))})`;
}

/** What happens at the edges, with the text of the data: the whole register or a bit of it. */
function statement(
  context: ItemContext,
  { target, enable, clear, controls }: Register,
  to: string,
  data: string,
  bit?: number,
): string {
  const { choices, writer } = context;
  const constant = (value: number): string =>
    bit === undefined ? writer.number(value, target.width) : `1'b${(value >> bit) & 1}`;
  const arrow = `<= ${choices.of('styles', ['', '#1 ', '#(1:2:3) '])}`;
  const tests = controls.map((control) => ({
    when: test(context, control),
    value: constant(control.value),
  }));
  const inner = [
    ...(clear === undefined
      ? []
      : [{ when: writer.piece(clear.by), value: constant(clear.value) }]),
    ...(enable === undefined ? [] : [{ when: `!(${writer.piece(enable)})`, value: to }]),
  ];
  const all = [...tests, ...inner];
  if (all.length > 0 && choices.pick('forms', 3) === 2) {
    const value = all.map(({ when, value: each }) => `(${when}) ? ${each} : `).join('');
    return `${to} ${arrow}${value}${data};`;
  }
  const isHeld = enable !== undefined && choices.pick('styles', 2) === 0;
  const shown = isHeld ? all.slice(0, -1) : all;
  const last = isHeld
    ? `if (${writer.piece(enable)}) ${to} ${arrow}${data};`
    : `${to} ${arrow}${data};`;
  const branches = shown.map(({ when, value }) => `if (${when}) ${to} ${arrow}${value}; else `);
  return branches.join('') + last;
}

function test({ choices, writer, module }: ItemContext, { bit, level }: Control): string {
  const name = writer.bit(module.reset, bit);
  return level === 1
    ? choices.of('styles', [name, `${name} == 1'b1`, `${name} != 0`])
    : choices.of('styles', [`!${name}`, `~${name}`, `${name} == 1'b0`]);
}

/** With a name for the block and a variable in it that holds the data. */
function named(context: ItemContext, register: Register, head: string): string {
  const { writer } = context;
  const { target, controls } = register;
  const block = context.fresh('b');
  const range = writer.range({ isVector: target.width > 1, msb: target.width - 1, lsb: 0 });
  const data = writer.piece(register.data);
  // Asynchronous controls are found around everything that the clock does.
  if (controls.length > 0) {
    return `${head} begin : ${block} ${statement(context, register, context.name(target), data)} end`;
  }
  const inner = statement(context, register, context.name(target), 'next');
  return `${head} begin : ${block} reg ${range}next; next = ${data}; ${inner} end`;
}

/** An `always` for each bit. */
function bitLoop(context: ItemContext, register: Register): string {
  const { target, data } = register;
  const { writer } = context;
  const from = context.bits(data);
  const processes = from.map((text, bit) => {
    const to = target.isVector
      ? `${context.name(target)}[${writer.integer(indexOf(target, bit))}]`
      : context.name(target);
    return `always ${events(context, register)} ${statement(context, register, to, text, bit)}`;
  });
  return processes.join('\n  ');
}

/** The text of a latch. */
export function spellLatch(context: ItemContext, latch: Latch): string {
  const { choices, module, writer } = context;
  const { target, data, level } = latch;
  if (choices.pick('forms', 3) === 2) {
    const table = latchTable(context, latch);
    if (table !== undefined) return table;
  }
  context.variables.add(target);
  const clock = context.name(module.clock);
  const to = context.name(target);
  const from = writer.piece(data);
  const open =
    level === 1 ? clock : choices.of('styles', [`!${clock}`, `~${clock}`, `${clock} == 0`]);
  return choices.of('forms', [
    `always @* if (${open}) ${to} = ${from};`,
    `always @(*) begin if (${open}) ${to} <= ${from}; end`,
    `always @* case (${clock}) 1'b${level}: ${to} = ${from}; endcase`,
  ]);
}
