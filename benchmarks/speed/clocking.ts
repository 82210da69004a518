import { writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import { fileURLToPath } from 'node:url';
import {
  type ClockTiming,
  compile,
  Diagnostics,
  designOf,
  powerUpState,
  readNetlist,
  Source,
} from '../../compiler/index.js';
import { fillRandomRows, RandomBits, WasmEngine } from '../../runtime/index.js';

/**
 * Measures what the ways of clocking cost: the same bank of registers behind one clock edge, and
 * behind gates, latches, dividers and a clock of its own. Writes `benchmarks/results/clocking.md`.
 *
 *   npx tsx benchmarks/speed/clocking.ts
 */

const results = fileURLToPath(new URL('../results/clocking.md', import.meta.url));

const CYCLES = 1000;
const ROUNDS = 9;
const ROUND_MS = 60;

/** A design in which 256 registers mix their neighbours' bits with eight inputs. */
interface Way {
  readonly name: string;
  /** What makes the bank's clock, and how the bank is written. */
  readonly clocking: string;
  readonly bank?: string;
  readonly ports?: string;
  readonly timings?: readonly ClockTiming[];
}

const PLAIN = 'always @(posedge c) r <= next;';

const ways: readonly Way[] = [
  { name: 'one edge of one clock', clocking: 'wire c = clk;' },
  {
    name: 'enable (a multiplexer before each register)',
    clocking: 'wire c = clk;',
    bank: 'always @(posedge c) if (en) r <= next;',
  },
  {
    name: 'clock gate with a latch',
    clocking: 'reg open; always @* if (!clk) open = en; wire c = clk & open;',
  },
  {
    name: 'asynchronous reset from a port',
    clocking: 'wire c = clk;',
    bank: 'always @(posedge c or negedge en) if (!en) r <= 0; else r <= next;',
  },
  {
    name: 'latch pairs',
    clocking: 'wire c = clk; reg [255:0] m;',
    bank: 'always @* if (!c) m = next; always @* if (c) r = m;',
  },
  {
    name: 'both edges',
    clocking: 'wire c = clk; reg [255:0] m;',
    bank: 'always @(negedge c) m <= next; always @(posedge c) r <= m;',
  },
  {
    name: 'clock divided by two (a second wave)',
    clocking: 'reg half; always @(posedge clk) half <= ~half; wire c = half;',
  },
  {
    name: 'divided by four, rippling (three waves)',
    clocking: 'reg h, q; always @(posedge clk) h <= ~h; always @(posedge h) q <= ~q; wire c = q;',
  },
  {
    name: 'a clock of its own, periods 3 and 2',
    clocking: 'wire c = own; reg [7:0] count; always @(posedge clk) count <= count + 1;',
    ports: ', input own',
    timings: [
      { port: 'clk', period: 3, offset: 0 },
      { port: 'own', period: 2, offset: 0 },
    ],
  },
];

function textOf({ clocking, bank = PLAIN, ports = '' }: Way): string {
  return `module bank(input clk${ports}, input en, input [7:0] d, output [31:0] y);
    reg [255:0] r;
    wire [255:0] next = ({r[254:0], r[255]} ^ {r[250:0], r[255:251]}) & ~{r[3:0], r[255:4]} ^ {8{d, d[2:0], d[7:3], ~d, d ^ r[40:33]}};
    ${clocking}
    ${bank}
    assign y = r[31:0];
  endmodule`;
}

/** Nanoseconds a cycle: the median of several rounds, each long enough for the clock. */
async function measure(way: Way, threeValued: boolean): Promise<number> {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source('bank.v', textOf(way))], {}, diagnostics);
  if (circuit === undefined)
    throw new Error(diagnostics.list.map(({ message }) => message).join('\n'));
  const { timings } = way;
  const design = designOf(circuit, { threeValued, ...(timings && { timings }) });
  const engine = await WasmEngine.create(await compile(design), undefined, { usesTable: false });
  engine.reset(powerUpState(circuit, threeValued ? 'unknown' : 'zero'));
  const { words } = design.layout.inputs;
  const stride = threeValued ? 2 * words : words;
  const bits = new Uint32Array(CYCLES * words);
  fillRandomRows(new RandomBits(1), design.layout.inputs, bits, CYCLES, words);
  const rows = new Uint32Array(CYCLES * stride);
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    rows.set(bits.subarray(cycle * words, (cycle + 1) * words), cycle * stride);
  }
  const response = new Uint32Array(CYCLES * 2);
  const times: number[] = [];
  for (let round = 0; round < ROUNDS; round++) {
    const start = performance.now();
    let calls = 0;
    while (performance.now() - start < ROUND_MS) {
      engine.run(CYCLES, rows, stride, response);
      calls++;
    }
    times.push(((performance.now() - start) * 1e6) / (calls * CYCLES));
  }
  return times.sort((p, q) => p - q)[ROUNDS >> 1]!;
}

const lines: string[] = [];
let first: readonly number[] | undefined;
for (const way of ways) {
  const times = [await measure(way, false), await measure(way, true)];
  first ??= times;
  const cells = times.flatMap((time, i) => [time.toFixed(1), (time / first![i]!).toFixed(2)]);
  lines.push(`| ${way.name} | ${cells.join(' | ')} |`);
  process.stderr.write(`${lines.at(-1)}\n`);
}
const text = [
  '# What clocking costs',
  '',
  `Measured on ${cpus().length} cores of ${cpus()[0]?.model}, Node ${process.version}, by`,
  '`npx tsx benchmarks/speed/clocking.ts`. The same bank of 256 registers and its logic in every row:',
  'nanoseconds a cycle of generated code, and times over the first row, with two values and with three.',
  'Medians of nine rounds. A clock that is divided or has its own pace captures less often, but every',
  'cycle evaluates the logic for the edge that may come.',
  '',
  '| clocking | ns, 0 and 1 | ratio | ns, 0, 1 and x | ratio |',
  '|---|---|---|---|---|',
  ...lines,
  '',
].join('\n');
writeFileSync(results, text);
