import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { createEngine, engineNames } from '../../compiler/engines.js';
import { RandomBits } from '../../runtime/random.js';
import { expectModel, type Model, randomInputs, readingOf, type Values } from '../rtl/circuits.js';
import { circuitOfText, moduleDesign, moduleText } from './circuits.js';
import { hexText, ops, Word16 } from './word16.js';

const CYCLES = 600;

describe('a register file with two read ports', () => {
  const design = moduleDesign('register_file.v');
  const model = (): Model => {
    const registers = Uint32Array.from({ length: 32 }, (_, n) => Math.imul(0x01010101, n));
    return ({ write, rd, ra, rb, data }) => {
      const values = { a: ra === 0 ? 0 : registers[ra!]!, b: rb === 0 ? 0 : registers[rb!]! };
      if (write && rd !== 0) registers[rd!] = data!;
      return values;
    };
  };

  it('is a memory and gives what its model gives', async () => {
    expect(design.layout.memories).toEqual([{ name: 'registers', width: 32, depth: 32 }]);
    await expectModel(design, model, randomInputs(design, 1, CYCLES));
  });

  it('gives the same built from registers', async () => {
    const small = moduleDesign('register_file.v', { memoriesFrom: 65537 });
    expect(small.layout.memories).toEqual([]);
    expect(small.layout.stateNames).toContain('registers[3][0]');
    await expectModel(small, model, randomInputs(small, 2, CYCLES), ['wasm']);
  });
});

describe('a deep first-in first-out memory', () => {
  it('gives what its model gives, full and empty', async () => {
    const design = moduleDesign('deep_fifo.v');
    const model = (): Model => {
      const words: number[] = [];
      return ({ reset, push, pop, data }) => {
        if (reset) words.length = 0;
        const full = words.length === 1000;
        const empty = words.length === 0;
        const shown = {
          count: words.length,
          full: Number(full),
          empty: Number(empty),
          oldest: words[0] ?? 0,
        };
        if (reset) return shown;
        if (pop && !empty) words.shift();
        if (push && !full) words.push(data!);
        return shown;
      };
    };
    const rows = randomInputs(design, 3, 5000, (_, chance, cycle) => ({
      reset: Number(chance(2000)),
      push: Number(cycle % 2400 < 1300 || chance(3)),
      pop: Number(cycle % 2400 >= 1300 || chance(4)),
    }));
    await expectModel(design, model, rows);
  });
});

describe('a memory with byte enables', () => {
  it('gives what its model gives, outside of its words too', async () => {
    const design = moduleDesign('byte_ram.v');
    expect(design.circuit.memories[0]!.writes).toHaveLength(1);
    const model = (): Model => {
      const words = new Uint32Array(48);
      let next = 0;
      return ({ enable, address, data }) => {
        const now = words[address!] ?? 0;
        const shown = { now, next };
        next = now;
        let mask = 0;
        for (let i = 0; i < 4; i++) if ((enable! >> i) & 1) mask |= 0xff << (8 * i);
        if (address! < 48) words[address!] = (now & ~mask) | (data! & mask);
        return shown;
      };
    };
    await expectModel(design, model, randomInputs(design, 4, CYCLES));
  });
});

describe('a macro with two ports', () => {
  it('shows what was there before, and lets port b write last', async () => {
    const design = moduleDesign('two_ports.v');
    const model = (): Model => {
      const words = new Uint16Array(100);
      let [qa, qb] = [0, 0];
      return (row) => {
        const shown = { q_a: qa, q_b: qb };
        const before = words.slice();
        if (row.enable_a) {
          qa = before[row.address_a!] ?? 0;
          if (row.write_a && row.address_a! < 100) words[row.address_a!] = row.data_a!;
        }
        if (row.enable_b) {
          qb = before[row.address_b!] ?? 0;
          if (row.write_b && row.address_b! < 100) words[row.address_b!] = row.data_b!;
        }
        return shown;
      };
    };
    const rows = randomInputs(design, 5, CYCLES, ({ address_a }, chance) =>
      chance(2) ? { address_b: address_a! } : {},
    );
    await expectModel(design, model, rows);
  });
});

describe('a memory on two clocks', () => {
  const timings = [
    { port: 'write_clk', period: 3, offset: 0 },
    { port: 'read_clk', period: 2, offset: 0 },
  ];

  it('gives what its model gives, both at their own pace', async () => {
    const design = moduleDesign('dual_clock_ram.v', {}, { timings });
    const model = (): Model => {
      const words = new Uint16Array(64);
      let shown = 0;
      let cycle = 0;
      return ({ write, write_address, read_address, write_data }) => {
        const read_data = shown;
        for (let tick = 3 * cycle; tick < 3 * cycle + 3; tick++) {
          const old = words[read_address!]!;
          if (tick % 3 === 0 && write) words[write_address!] = write_data!;
          if (tick % 2 === 0) shown = old;
        }
        cycle++;
        return { read_data };
      };
    };
    const rows = randomInputs(design, 6, CYCLES, ({ write_address }, chance) =>
      chance(2) ? { read_address: write_address! } : {},
    );
    await expectModel(design, model, rows);
  });
});

describe('a processor with its program in a memory', () => {
  /** Sums up the words from `data` on, in place, and puts out each sum; ends at a word that is 0. */
  const data = 0x4000;
  const program = [
    ops.lui(1, data >> 7), // 0
    ops.ldi(2, 0), // 1
    ops.ld(3, 1, 0), // 2: loop
    ops.bz(3, 6), // 3
    ops.add(2, 2, 3), // 4
    ops.st(2, 1, 0), // 5
    ops.out(2), // 6
    ops.addi(1, 1, 1), // 7
    ops.ldi(4, 1), // 8
    ops.bnz(4, -8), // 9
    ops.in(5), // 10
    ops.out(5), // 11
    ops.halt(), // 12
  ];
  const words = Array.from({ length: 40 }, (_, i) => ((i * 2731) % 65521) + 1);
  const files = { 'sums.hex': hexText(program, new Map([[data, [...words, 0]]])) };
  const top = `module top (input clk, input reset, input [15:0] in_port, output [15:0] out_port,
      output strobe, output [14:0] pc, output halted);
      word16 #(.PROGRAM("sums.hex")) cpu (clk, reset, in_port, out_port, strobe, pc, halted);
    endmodule`;

  const text = `${moduleText('word16.v')}\n${top}`;
  const cycle = (inPort: number): Values => ({ reset: 0, in_port: inPort });

  it('puts out what its model puts out', async () => {
    const design = designOf(circuitOfText(text, { files }));
    const model = new Word16(program);
    model.memory.set(words, data);
    while (!model.halted) model.step(0xbeef);
    const rows = new Array<Values>(model.cycles + 4).fill(cycle(0xbeef));
    for (const name of engineNames) {
      const engine = await createEngine(design, name);
      const read = readingOf(engine, rows);
      const out = rows.flatMap((_, at) => (read('strobe', at) ? [read('out_port', at)] : []));
      expect(out, name).toEqual(model.out);
      expect(read('halted', rows.length - 1)).toBe(1);
      expect(new Uint16Array(engine.memoryState().buffer), name).toEqual(model.memory);
      engine.reset(powerUpState(design.circuit, 'zero'));
      const again = readingOf(engine, rows);
      expect(again('out_port', rows.length - 1), 'after a reset').toBe(0xbeef);
    }
  });

  it('comes to the same with three values, where the file says all', async () => {
    const design = designOf(circuitOfText(text, { files }), { threeValued: true });
    const model = new Word16(program);
    model.memory.set(words, data);
    while (!model.halted) model.step(0);
    const contents: Uint8Array[] = [];
    for (const name of engineNames) {
      const engine = await createEngine(design, name);
      engine.reset(powerUpState(design.circuit, 'unknown'));
      engine.run(model.cycles, new Uint32Array(2), 0, undefined);
      contents.push(engine.memoryState());
    }
    const word = (at: number) => [...contents[0]!.subarray(at * 4, at * 4 + 4)];
    const sums = words.map((_, i) => model.memory[data + i]!);
    expect(words.map((_, i) => word(data + i))).toEqual(
      sums.map((sum) => [sum & 255, sum >> 8, 0, 0]),
    );
    expect(word(0x7fff)).toEqual([0, 0, 255, 255]);
    for (const other of contents.slice(1)) expect(other).toEqual(contents[0]);
  });

  it('runs random programs as its model does', async () => {
    const random = new RandomBits(7);
    const image = [...Array.from({ length: 500 }, () => random.next() & 0xffff), ops.halt()];
    const hex = hexText(image, new Map([[0x7000, [ops.halt()]]]));
    const design = designOf(circuitOfText(text, { files: { 'sums.hex': hex } }));
    const model = new Word16(image);
    model.memory[0x7000] = ops.halt();
    for (let i = 0; i < 400 && !model.halted; i++) model.step(0x1234);
    const rows = new Array<Values>(model.cycles).fill(cycle(0x1234));
    for (const name of engineNames) {
      const engine = await createEngine(design, name);
      readingOf(engine, rows);
      expect(new Uint16Array(engine.memoryState().buffer), name).toEqual(model.memory);
    }
  });
});
