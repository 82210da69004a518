import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { HeldInputs } from '../../compiler/circuit/heldInputs.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { openStarts } from '../../compiler/circuit/startingRegisters.js';
import { X } from '../../compiler/circuit/values.js';
import { designOf } from '../../compiler/compile.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { rowStride } from '../../runtime/layout.js';
import { circuitOf } from '../read/verilog/elaborate/reading.js';
import { courseOf } from '../support/engines.js';
import { randomCircuit } from '../support/randomCircuit.js';

const SEED = 20261202;

/** Which of the registers `q` of a module are left open, bit by bit from the left. */
function open(items: string, ports = ''): string {
  const circuit = circuitOf(
    `module t (input clk, rst, en, scan, si, input [3:0] d, output reg [3:0] q${ports}); ${items} endmodule`,
  );
  const found = new Set(
    Array.from(openStarts(designOf(circuit)), (r) => circuit.registers.output[r]),
  );
  const nets = circuit.outputs.find(({ name }) => name === 'q')!.nets;
  return Array.from(nets, (net) => (found.has(net) ? '1' : '0'))
    .reverse()
    .join('');
}

describe('registers whose start is left open', () => {
  it.each([
    ['those that only count', 'always @(posedge clk) q <= q + en;', '1111'],
    [
      'none with a synchronous reset',
      'always @(posedge clk) if (rst) q <= 0; else q <= q + en;',
      '0000',
    ],
    [
      'none with one that is active at 0',
      'always @(posedge clk) if (!rst) q <= 9; else q <= q + en;',
      '0000',
    ],
    [
      'the bits that a reset leaves out',
      'always @(posedge clk) begin q <= q + 1; if (rst) q[2:1] <= 0; end',
      '1001',
    ],
    [
      'none that a reset reaches later',
      'reg r; always @(posedge clk) begin r <= rst; if (r) q <= 1; else q <= q + d; end',
      '0000',
    ],
    ['all of a shift register', 'always @(posedge clk) q <= {q[2:0], si};', '1111'],
    ['those that take data', 'always @(posedge clk) q <= d;', '1111'],
    [
      'those that an input clears which is no reset',
      'always @(posedge clk) q <= q & {4{en}};',
      '1111',
    ],
    [
      'those that only take data while others are reset',
      'reg r; always @(posedge clk) begin r <= !rst & ~r; q <= {q[2:0], si}; end',
      '1111',
    ],
    [
      'none with a scan path before the reset',
      "always @(posedge clk) q <= scan ? {q[2:0], q[3] ^ si} : rst ? 4'd0 : q + 1;",
      '0000',
    ],
    [
      'those that another one enables',
      'reg g; always @(posedge clk) begin g <= ~g; if (g) q <= d; end',
      '1111',
    ],
    [
      'none with a scan path before a reset that is active at 0',
      "always @(posedge clk) q <= !scan ? {q[2:0], q[3] ^ si} : !rst ? 4'd0 : q + 1;",
      '0000',
    ],
    [
      'none behind a gated clock that one input opens and another resets',
      'reg l; always @* if (!clk) l = en; wire c = clk & l; always @(posedge c) if (rst) q <= 0; else q <= ~q;',
      '0000',
    ],
    [
      'those on a clock that a register makes',
      'reg h; always @(posedge clk) h <= ~h; always @(posedge h) if (rst) q <= 0; else q <= q + 1;',
      '1111',
    ],
    ['none that always get a constant', 'always @(posedge clk) q <= 5;', '0000'],
    [
      'none with an initial value, set or reset',
      'initial q[3:2] = 1; always @(posedge clk or posedge rst) if (rst) q[1:0] <= 0; else q[1:0] <= ~q[1:0]; always @(posedge clk) q[3:2] <= ~q[3:2];',
      '0000',
    ],
  ])('are %s', (_, items, expected) => {
    expect(open(items)).toBe(expected);
  });
});

describe('a synchronous reset is told by its name', () => {
  const openWith = (name: string): number => {
    const circuit = circuitOf(
      `module t (input clk, ${name}, output reg q); always @(posedge clk) q <= q & ${name}; endmodule`,
    );
    return openStarts(designOf(circuit)).length;
  };

  it.each([
    'rst_n',
    'reset',
    'HRESETn',
    'PRESETn',
    'sysReset',
    'sys_rst',
    'xrst',
    'nrst',
    'rst_ni',
    'clrb',
    'arst0',
    'resetall',
    '\\core/rst ',
  ])('such as %s', (name) => expect(openWith(name)).toBe(0));

  it.each(['rest', 'first', 'burst_n', 'nuclear', 'en'])('and not %s', (name) =>
    expect(openWith(name)).toBe(1),
  );
});

describe('inputs that are held', () => {
  it('make known what a run with all else unknown makes known, as the same', () => {
    const options = {
      clocking: 'gated',
      asynchronous: true,
      latches: true,
      loops: true,
      unknowns: true,
    } as const;
    fc.assert(
      fc.property(randomCircuit(options), fc.nat(), fc.boolean(), (circuit, choice, level) => {
        const design = designOf(circuit, { threeValued: true });
        const { inputs } = design.layout;
        fc.pre(inputs.bits > 0);
        const bit = choice % inputs.bits;
        const port = inputs.ports.find(
          ({ offset, width }) => bit >= offset && bit < offset + width,
        )!;
        const net = circuit.inputs.find(({ name }) => name === port.name)!.nets[bit - port.offset]!;
        const held = new HeldInputs(
          circuit,
          design.clocks.ports.map((clock) => clock.net),
        );
        held.hold(net, Number(level));
        const cycles = circuit.registers.count + circuit.latches.count + 2;
        const stride = rowStride(inputs, true);
        const rows = new Uint32Array(cycles * stride);
        for (let row = 0; row < cycles; row++) {
          for (let i = 0; i < inputs.bits; i++) {
            const isHeld = i === bit;
            if (isHeld && !level) continue;
            const word = row * stride + (isHeld ? 0 : inputs.words) + (i >>> 5);
            rows[word]! |= 1 << (i & 31);
          }
        }
        const engine = new ReferenceEngine(circuit, design);
        const start = powerUpState(circuit, 'unknown').fill(X);
        const { state } = courseOf(engine, start, rows, cycles);
        fc.pre(state !== undefined);
        for (const known of held.knownSince(0)) {
          const r = circuit.registers.output.indexOf(known);
          if (r >= 0) expect([r, state![r]]).toEqual([r, held.valueOf(known)]);
        }
      }),
      { seed: SEED, numRuns: 300 },
    );
  });
});
