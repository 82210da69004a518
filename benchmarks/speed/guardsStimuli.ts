import type { ModelLayout } from '../../runtime/layout.js';
import { rowStride } from '../../runtime/layout.js';
import { fillRandomRows, RandomBits } from '../../runtime/random.js';

/** Cycles of a stimulus, which is run over and over. */
const CYCLES = 4096;

const SEED = 1;

/** What inputs do. */
export interface Stimulus {
  readonly name: string;
  /** Cycles for which random inputs are held. */
  readonly held: number;
  /** Values of ports instead, by cycle. */
  readonly ports?: Readonly<Record<string, (cycle: number) => number>>;
}

const random: readonly Stimulus[] = [
  { name: 'busy: random in every cycle', held: 1 },
  { name: 'random, held for 16 cycles', held: 16 },
  { name: 'random, held for 64 cycles', held: 64 },
  { name: 'random, held for 1000 cycles', held: 1000 },
];

const once = (every: number) => (cycle: number) => (cycle % every === 0 ? 1 : 0);

const own: Readonly<Record<string, readonly Stimulus[]>> = {
  uart: [
    {
      name: 'no traffic',
      held: CYCLES,
      ports: { reset: () => 0, rx: () => 1, tx_valid: () => 0 },
    },
    {
      name: 'a byte sent every 2000 cycles',
      held: 2000,
      ports: { reset: () => 0, rx: () => 1, tx_valid: once(2000) },
    },
  ],
  aes128: [
    { name: 'a block every 100 cycles', held: 100, ports: { start: once(100) } },
    { name: 'a block every 1000 cycles', held: 1000, ports: { start: once(1000) } },
  ],
  'aes128 cores=4': [
    { name: 'one core works at a time', held: CYCLES, ports: { start: once(44) } },
    { name: 'a block every 1000 cycles', held: 1000, ports: { start: once(1000) } },
  ],
  sha256: [{ name: 'never started', held: CYCLES, ports: { start: () => 0, reset: () => 0 } }],
  sleeper: [
    { name: 'asleep', held: CYCLES, ports: { wake: () => 0 } },
    { name: 'woken every 1000 cycles', held: 1000, ports: { wake: once(1000) } },
  ],
};

/** The stimuli that a circuit is measured with. */
export const stimuliOf = (circuit: string): readonly Stimulus[] => [
  ...random,
  ...(own[circuit] ?? []),
];

/** The rows of a stimulus. */
export function heldRows(layout: ModelLayout, { held, ports = {} }: Stimulus) {
  const stride = rowStride(layout.inputs, layout.threeValued);
  const changes = Math.ceil(CYCLES / held);
  const drawn = new Uint32Array(changes * stride);
  fillRandomRows(new RandomBits(SEED), layout.inputs, drawn, changes, stride);
  const rows = new Uint32Array(CYCLES * stride);
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    const from = Math.floor(cycle / held) * stride;
    const row = rows.subarray(cycle * stride, (cycle + 1) * stride);
    row.set(drawn.subarray(from, from + stride));
    for (const { name, offset } of layout.inputs.ports) {
      const value = ports[name]?.(cycle);
      if (value === undefined) continue;
      row[offset >>> 5]! &= ~(1 << (offset & 31));
      row[offset >>> 5]! |= value << (offset & 31);
    }
  }
  return { rows, count: CYCLES };
}

/**
 * A controller that sleeps, its timer running, until it is woken; then a filter works for 64
 * cycles.
 */
export const sleeper = `module sleeper(input clk, input wake, input [15:0] sample,
  output reg [31:0] sum, output reg [15:0] timer, output active);
  reg [6:0] left;
  reg [15:0] delay [0:7];
  assign active = left != 0;
  wire [15:0] mixed = delay[1] ^ {delay[3][7:0], delay[3][15:8]} ^ (delay[5] & delay[7]);
  integer i;
  initial begin
    sum = 0; timer = 0; left = 0;
    for (i = 0; i < 8; i = i + 1) delay[i] = 0;
  end
  always @(posedge clk) begin
    timer <= timer + 1;
    if (wake) left <= 64;
    else if (active) left <= left - 1;
    if (active) begin
      delay[0] <= sample + mixed;
      for (i = 1; i < 8; i = i + 1) delay[i] <= delay[i - 1];
      sum <= sum + {16'd0, delay[7]} + {mixed, mixed};
    end
  end
endmodule
`;
