import type { Cell } from '../circuits/cells/cell.js';
import { cellNamed } from '../circuits/cells/library.js';

/** How many instances a netlist may have. */
export const instanceLimits = { least: 2000, most: 20_000_000 } as const;

const dataBits = 64;
const instancesPerBlock = 1024;
const registersPerBlock = 128;
const wiresPerLine = 8;

// Weighted by how often each is named; a gate word of Verilog stands for that gate.
const logicWords = [
  ...['hob1_inverter', 'hob2_inverter', 'hob4_buffer', 'not', 'buf'],
  ...['hob1_nand2', 'hob1_nand2', 'hob2_nand2', 'hob1_nor2', 'hob2_nor2', 'nand', 'nor'],
  ...['hob1_and2', 'hob1_or2', 'hob1_nand3', 'hob1_nor3', 'hob1_nand4', 'hob1_and2_bar1'],
  ...['hob1_xor2', 'hob1_xnor2', 'xor', 'and', 'or'],
  ...['hob1_andnor21', 'hob1_ornand21', 'hob1_andnor22', 'hob1_mux2', 'hob1_majority'],
];
const registerWords = ['hob1_flop', 'hob1_flop_clear', 'hob2_flop_clear', 'hob1_flop_enable'];

/**
 * Writes a flat netlist of so many instances of the cell library and of gates, as a layout flow
 * would leave it: one module, all wires declared, named connections, escaped names and bits of
 * vectors. An eighth are flip-flops on one clock. Nothing loops, everything is driven and read.
 *
 * The same text for the same number, in chunks of whole lines. Throws RangeError beyond
 * `instanceLimits`.
 */
export function* flatNetlist(instances: number): Generator<string> {
  const { least, most } = instanceLimits;
  if (!Number.isInteger(instances) || instances < least || instances > most) {
    throw new RangeError(`expected ${least} to ${most} instances, got ${instances}`);
  }
  yield 'module flat (clk, clr_n, en, d, y);\n  input clk, clr_n, en;\n';
  yield `  input [${dataBits - 1}:0] d;\n  output [${dataBits - 1}:0] y;\n`;
  const blocks = Math.ceil(instances / instancesPerBlock);
  for (let block = 0; block < blocks; block++) yield declarations(block, instances);
  const writer = new BlockWriter();
  for (let block = 0; block < blocks; block++) yield writer.block(block, sizeOf(block, instances));
  yield writer.outputs();
}

function sizeOf(block: number, instances: number): number {
  return Math.min(instancesPerBlock, instances - block * instancesPerBlock);
}

/** Half of a block's registers are bits of two vectors, the others have escaped names. */
function registerNet(block: number, index: number): string {
  if (index < 32) return `count_${block}[${index}]`;
  if (index < 64) return `data_${block}[${index - 32}]`;
  return `\\unit_${block}/state[${index - 64}] `;
}

function declarations(block: number, instances: number): string {
  const size = sizeOf(block, instances);
  const lines = [`  wire [31:0] count_${block}, data_${block};`];
  const names: string[] = [];
  for (let i = 64; i < Math.min(registersPerBlock, size); i++) names.push(registerNet(block, i));
  for (let i = registersPerBlock; i < size; i++) names.push(gateNet(block, i));
  for (let i = 0; i < names.length; i += wiresPerLine) {
    lines.push(`  wire ${names.slice(i, i + wiresPerLine).join(', ')};`);
  }
  return `${lines.join('\n')}\n`;
}

const gateNet = (block: number, index: number): string => `n${block * instancesPerBlock + index}`;

/** Writes block after block, each behind registers that hold what the one before has left unread. */
class BlockWriter {
  /** Nets that nothing reads yet; their number stays the same. */
  #unread: readonly string[] = Array.from({ length: dataBits }, (_, i) => `d[${i}]`);
  #random = 20260301;

  /** The instances of a block. */
  block(block: number, size: number): string {
    const registers = Math.min(registersPerBlock, size);
    const states = Array.from({ length: registers }, (_, i) => registerNet(block, i));
    const readable = states.slice();
    const unread = states.slice();
    const lines: string[] = [];
    let oldest = 0;
    for (let i = registers; i < size; i++) {
      const net = gateNet(block, i);
      lines.push(this.#gate(i, net, unread[oldest++]!, readable));
      readable.push(net);
      unread.push(net);
    }
    const data = [...this.#unread, ...unread.slice(oldest)];
    for (let i = 0; i < registers; i++) lines.push(this.#register(block, i, data[i]!));
    this.#unread = data.slice(registers);
    return `${lines.join('\n')}\n`;
  }

  /** The output port, and the end of the module. */
  outputs(): string {
    const lines = this.#unread.map((net, i) => `  buf (y[${i}], ${net});`);
    return `${lines.join('\n')}\nendmodule\n`;
  }

  /** A gate that reads one net that nothing has read before, and any others. */
  #gate(index: number, net: string, unread: string, all: readonly string[]): string {
    const word = this.#one(logicWords);
    const inputCount = word === 'not' || word === 'buf' ? 1 : 2;
    const cell = word.startsWith('hob') ? cellNamed(word) : undefined;
    const wanted = cell === undefined ? inputCount : cell.pins.length - 1;
    const inputs = [unread];
    while (inputs.length < wanted) inputs.push(this.#one(all));
    if (cell === undefined) return `  ${word} (${net}, ${inputs.join(', ')});`;
    return instance(cell, `U${net.slice(1)}_${index % 10}`, { y: net }, inputs);
  }

  #register(block: number, index: number, data: string): string {
    const cell = cellNamed(this.#one(registerWords));
    const name = `\\unit_${block}/state_reg[${index}] `;
    const known = { ck: 'clk', clr_n: 'clr_n', en: 'en', q: registerNet(block, index), d: data };
    return instance(cell, name, known, []);
  }

  #one<T>(list: readonly T[]): T {
    // The xorshift of G. Marsaglia, "Xorshift RNGs", 2003, with the shifts 13, 17 and 5.
    let x = this.#random;
    x ^= x << 13;
    x ^= x >>> 17;
    x ^= x << 5;
    this.#random = x;
    return list[(x >>> 0) % list.length]!;
  }
}

function instance(
  cell: Cell,
  name: string,
  known: Readonly<Record<string, string>>,
  others: readonly string[],
): string {
  let next = 0;
  const pins = cell.pins.flatMap((pin) => {
    const net = known[pin.name] ?? others[next++];
    return net === undefined ? [] : [`.${pin.name}(${net})`];
  });
  return `  ${cell.name} ${name} (${pins.join(', ')});`;
}
