import type { Latch, Operation, Operator, Register } from '../design/model.js';
import type { ItemContext } from './context.js';

const signs: Partial<Record<Operator, string>> = { and: '&', or: '|', xor: '^', xnor: '~^' };

/** The modules and primitives that stand for operations, by name. */
export function helperText(name: string): string {
  const text = texts[name];
  if (text === undefined) throw new RangeError(`there is no helper ${name}`);
  return text;
}

const texts: Readonly<Record<string, string>> = {
  ...Object.fromEntries(
    Object.entries(signs).map(([operator, sign]) => [
      `z_${operator}`,
      `module z_${operator} (y, a, b); parameter W = 1; output [W-1:0] y; input [W-1:0] a, b;
  assign y = a ${sign} b;
endmodule`,
    ]),
  ),
  z_mux: `module z_mux #(parameter W = 3, H = W - 1) (
  output [H:0] y, input s, input [H:0] one, zero);
  assign y = s ? one : zero;
endmodule`,
  z_mux_table: `primitive z_mux_table (y, s, one, zero);
  output y; input s, one, zero;
  table 1 0 ? : 0; 1 1 ? : 1; 0 ? 0 : 0; 0 ? 1 : 1; x 0 0 : 0; x 1 1 : 1; endtable
endprimitive`,
  z_flop: `\`celldefine module z_flop (q, c, d); parameter W = 1;
  output [W:1] q; reg [W:1] q; input c; input [W:1] d;
  always @(posedge c) q <= #1 d;
  specify (posedge c => (q +: d)) = (1, 2); $setup(d, posedge c, 1); endspecify
endmodule \`endcelldefine`,
  z_flop_table: `primitive z_flop_table (output reg q, input c, d);
  table (01) 0 : ? : 0; r 1 : ? : 1; (0x) 0 : 0 : 0; (0x) 1 : 1 : 1; n ? : ? : -; ? * : ? : -;
  endtable
endprimitive`,
  z_latch_table: `primitive z_latch_table (q, g, d);
  output q; reg q; input g, d;
  table 1 0 : ? : 0; 1 1 : ? : 1; 0 ? : ? : -; endtable
endprimitive`,
};

/** An instance of a cell of our own. */
export function cell(context: ItemContext, operation: Operation): string | undefined {
  const { operator, target, pieces } = operation;
  const texts = pieces.map((piece) => context.writer.piece(piece));
  const to = context.name(target);
  if (operator === 'mux' && target.width === 1 && context.choices.pick('styles', 2) === 1) {
    context.helpers.add('z_mux_table');
    return `z_mux_table #1 ${context.fresh('u')} (${[to, ...texts].join(', ')});`;
  }
  if (operator === 'mux') {
    context.helpers.add('z_mux');
    const [select, one, zero] = texts;
    const pins = `.y(${to}), .s(${select}), .one(${one}), .zero(${zero})`;
    return `z_mux #(.W(${target.width})) ${context.fresh('u')} (${pins});`;
  }
  if (signs[operator] === undefined) return undefined;
  context.helpers.add(`z_${operator}`);
  const [a, b] = texts;
  const name = context.fresh('u');
  return context.choices.of('styles', [
    `z_${operator} #(${target.width}) ${name} (${to}, ${a}, ${b});`,
    `z_${operator} ${name} (.b(${b}), .y(${to}), .a(${a})); defparam ${name}.W = ${target.width};`,
  ]);
}

/** A register without controls as an instance. */
export function flopCell(context: ItemContext, register: Register): string | undefined {
  const { target, data, isFalling, enable, clear, controls, initial } = register;
  if (enable !== undefined || clear !== undefined || controls.length > 0) return undefined;
  if (initial !== undefined) return undefined;
  const clock = isFalling
    ? `~${context.name(context.module.clock)}`
    : context.name(context.module.clock);
  const to = context.name(target);
  const from = context.writer.piece(data);
  if (target.width === 1 && context.choices.pick('styles', 2) === 1) {
    context.helpers.add('z_flop_table');
    return `z_flop_table ${context.fresh('u')} (${to}, ${clock}, ${from});`;
  }
  context.helpers.add('z_flop');
  const pins = `.q(${to}), .d(${from}), .c(${clock})`;
  return `z_flop #(.W(${target.width})) ${context.fresh('u')} (${pins});`;
}

/** A latch of one bit as an instance of a primitive. */
export function latchTable(
  context: ItemContext,
  { target, data, level }: Latch,
): string | undefined {
  if (target.width !== 1) return undefined;
  context.helpers.add('z_latch_table');
  const clock = context.name(context.module.clock);
  const enable = level === 1 ? clock : `!${clock}`;
  const terminals = [context.name(target), enable, context.writer.piece(data)];
  return `z_latch_table (${terminals.join(', ')});`;
}
