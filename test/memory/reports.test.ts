import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { powerUpMemory } from '../../compiler/circuit/powerUpMemory.js';
import { designOf } from '../../compiler/compile.js';
import { createEngine, engineNames } from '../../compiler/engines.js';
import { emitC } from '../../compiler/native/emitC.js';
import { inspect } from '../../compiler/report/inspection.js';
import { settleDesign } from '../../compiler/settle/settleDesign.js';
import { rowStride } from '../../runtime/layout.js';
import { randomRows, responseOf } from '../support/responses.js';
import { circuitOfText, moduleDesign } from './circuits.js';

const codesOf = (text: string): string[] =>
  inspect(designOf(circuitOfText(text)), []).problems.map(({ code }) => code);

describe('a memory', () => {
  it('is told of by inspect, with its ports and clocks', () => {
    const { memories, gates, registers, clocks } = inspect(moduleDesign('dual_clock_ram.v'), []);
    expect(memories).toEqual([
      {
        ...{ name: 'words', words: 64, width: 12, readPorts: 1, writePorts: 1 },
        ...{ clocks: ['write_clk'], hasInitial: false },
      },
    ]);
    expect([gates, registers]).toEqual([0, 12]);
    expect(clocks.map(({ port }) => port)).toEqual(['write_clk', 'read_clk']);
  });

  it('is a crossing where another clock captures what it holds', () => {
    const problems = inspect(moduleDesign('dual_clock_ram.v'), []).problems;
    const crossing = problems.find(({ code }) => code === 'clock-crossing');
    expect(crossing!.message).toContain('memory words to read_data[0]');
  });

  it('is unused where no output depends on it', () => {
    const text = (q: string) => `module top (input clk, input [9:0] a, d, output [9:0] q);
      reg [9:0] m [0:1023]; wire [9:0] w = m[a];
      always @(posedge clk) m[a] <= d;
      assign q = ${q}; endmodule`;
    expect(codesOf(text('w'))).not.toContain('state-unused');
    expect(codesOf(text('d'))).toContain('state-unused');
  });

  it('has a bound loop where its address depends on what it reads', () => {
    const text = `module top (input clk, input c, input [9:0] a, d, output [9:0] q);
      reg [9:0] m [0:1023]; wire [9:0] at = c ? q : a;
      always @(posedge clk) m[a] <= d;
      assign q = m[at]; endmodule`;
    expect(inspect(designOf(circuitOfText(text)), []).loops).toBe(1);
  });

  it('is refused where it cannot be run', async () => {
    const design = moduleDesign('byte_ram.v');
    const request = { stimulus: [], lanes: 2, seed: 0 };
    await expect(settleDesign(design, request)).rejects.toThrow('no memories');
    const state = powerUpState(design.circuit, 'zero');
    expect(emitC(design, state)).toEqual({ obstacle: 'there is a memory: words' });
  });
});

describe('the contents of memories', () => {
  it.each(engineNames)('go on from where they were saved, by %s', async (name) => {
    for (const threeValued of [false, true]) {
      const design = moduleDesign('byte_ram.v', {}, { threeValued });
      const rows = randomRows(design.layout, 9, 60);
      const stride = rowStride(design.layout.inputs, threeValued);
      const engine = await createEngine(design, name);
      engine.reset(powerUpState(design.circuit, 'random', 3));
      engine.loadMemory(powerUpMemory(design.circuit.memories, threeValued, 'random', 3));
      const whole = responseOf(engine, 60, rows);
      engine.reset(powerUpState(design.circuit, 'random', 3));
      engine.loadMemory(powerUpMemory(design.circuit.memories, threeValued, 'random', 3));
      responseOf(engine, 30, rows);
      const point = engine.save();
      const other = await createEngine(design, 'reference');
      other.restore(point);
      const rest = responseOf(other, 30, rows.subarray(30 * stride));
      expect(rest).toEqual(whole.subarray(whole.length / 2));
    }
  });

  it('are those that the netlist gives after a reset', async () => {
    const design = moduleDesign('register_file.v');
    for (const name of engineNames) {
      const engine = await createEngine(design, name);
      const first = engine.memoryState();
      expect([...first.subarray(4, 8)]).toEqual([1, 1, 1, 1]);
      engine.run(40, randomRows(design.layout, 4, 40), design.layout.inputs.words, undefined);
      expect(engine.memoryState()).not.toEqual(first);
      engine.reset(powerUpState(design.circuit, 'zero'));
      expect(engine.memoryState()).toEqual(first);
    }
  });

  it('are refused where they are none', async () => {
    const design = moduleDesign('dual_clock_ram.v');
    const engine = await createEngine(design, 'wasm');
    expect(() => engine.loadMemory(new Uint8Array(3))).toThrow('expected 128 bytes');
    expect(() => engine.loadMemory(new Uint8Array(128).fill(255))).toThrow('words[0]');
  });

  it('are random at power-up by the name of the memory', () => {
    const text = (name: string) => `module top (input clk, input [9:0] a, d, output [9:0] q);
      reg [9:0] ${name} [0:1023];
      always @(posedge clk) ${name}[a] <= d;
      assign q = ${name}[a]; endmodule`;
    const contents = (name: string, seed: number) =>
      powerUpMemory(circuitOfText(text(name)).memories, false, 'random', seed);
    expect(contents('m', 1)).toEqual(contents('m', 1));
    expect(contents('m', 1)).not.toEqual(contents('m', 2));
    expect(contents('m', 1)).not.toEqual(contents('n', 1));
    const ones = contents('m', 1).reduce(
      (sum, byte) => sum + byte.toString(2).replaceAll('0', '').length,
      0,
    );
    expect(Math.abs(ones - 5120)).toBeLessThan(300);
  });
});
