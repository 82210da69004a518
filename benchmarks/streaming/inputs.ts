import { closeSync, openSync, writeFileSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import { RandomBits } from '../../runtime/random.js';

/** Two small circuits of 32 flip-flops: one with vectors of 32 bits, one with 32 ports of one bit. */
export const netlists = {
  'word.v': `
module word (clk, step, total);
  input clk; input [31:0] step; output [31:0] total;
  reg [31:0] total = 32'd0;
  always @(posedge clk) total <= total ^ {step[30:0], total[31]};
endmodule
`,
  'bits.v': `
module bits (clk, ${list('s')}, ${list('t')});
  input clk, ${list('s')}; output ${list('t')};
  reg [31:0] total = 32'd0;
  wire [31:0] step = {${list('s')}};
  assign {${list('t')}} = total;
  always @(posedge clk) total <= total ^ {step[30:0], total[31]};
endmodule
`,
  // Its output is a stimulus for the first.
  'source.v': `
module source (clk, next, step);
  input clk; input [31:0] next; output [31:0] step;
  reg [31:0] step = 32'd0;
  always @(posedge clk) step <= next;
endmodule
`,
  'blocks.mjs': `
export default function* ({ rowWords }) {
  const rows = new Uint32Array(4096 * rowWords);
  for (let x = 1; ; ) {
    for (let i = 0; i < rows.length; i++) rows[i] = x = (Math.imul(x, 1664525) + 1013904223) >>> 0;
    yield rows;
  }
}
`,
  'values.mjs': `
export default function* () {
  for (let x = 1; ; ) yield { step: (x = (Math.imul(x, 1664525) + 1013904223) >>> 0) };
}
`,
  'reacting.mjs': `
export const reacts = true;
export default function* () {
  for (let seen = { total: 1 }; ; ) seen = yield { step: (seen.total ^ 1) >>> 0 };
}
`,
  'model.mjs': `
export default () => {
  let sum = 0;
  return ({ cycles, inputs: { step } }) => {
    const total = new Uint32Array(cycles);
    for (let i = 0; i < cycles; i++) {
      total[i] = sum;
      sum ^= (step[i] << 1) | (sum >>> 31);
    }
    return { total };
  };
};
`,
};

/** Writes the netlists, modules and stimuli of `cycles` random rows into a folder. */
export function writeInputs(folder: string, cycles: number): void {
  for (const [name, text] of Object.entries(netlists)) writeFileSync(join(folder, name), text);
  write(join(folder, 'word.csv'), 'step\n', cycles, (word) => `0x${hex(word)}\n`);
  write(
    join(folder, 'bits.csv'),
    `${list('s')}\n`,
    cycles,
    (word) => `${[...binary(word)].join()}\n`,
  );
  const declarations =
    '$timescale 1 ns $end\n$var reg 1 ! clk $end\n$var reg 32 " step [31:0] $end\n' +
    '$enddefinitions $end\n#0\n0!\n';
  let time = 0;
  write(join(folder, 'word.vcd'), declarations, cycles, (word) => {
    time += 10;
    return `b${binary(word)} "\n#${time - 5}\n1!\n#${time}\n0!\n`;
  });
}

function list(name: string): string {
  return Array.from({ length: 32 }, (_, i) => `${name}${i}`).join(', ');
}

const hex = (word: number): string => word.toString(16).padStart(8, '0');
const binary = (word: number): string => word.toString(2).padStart(32, '0');

function write(path: string, header: string, cycles: number, row: (word: number) => string): void {
  const file = openSync(path, 'w');
  const random = new RandomBits(1);
  let text = header;
  for (let i = 0; i < cycles; i++) {
    text += row(random.next());
    if (text.length < 1 << 20) continue;
    writeSync(file, text);
    text = '';
  }
  writeSync(file, text);
  closeSync(file);
}
