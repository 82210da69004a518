import { describe, expect, it } from 'vitest';
import { RunFault } from '../../runtime/engine.js';
import {
  blockCycles,
  heldStimulus,
  type ResponseBlock,
  randomStimulus,
  runBlocks,
  runBlocksSync,
  type StimulusBlock,
} from '../../runtime/stream.js';
import { randomRows, responseOf } from '../support/responses.js';
import { referenceFor } from '../support/rows.js';
import { smallCircuit } from '../support/smallCircuit.js';

// q is d of the cycle before; n is the input now.
const delay = () =>
  referenceFor(
    smallCircuit({
      inputs: ['clk', 'd'],
      outputs: ['q', 'n'],
      registers: { q: { clock: 'clk', data: 'd' } },
      gates: { n: 'buf d' },
    }),
  );

const collected = (blocks: Iterable<ResponseBlock>) =>
  Array.from(blocks, ({ firstCycle, cycles, rows }) => ({
    firstCycle,
    cycles,
    rows: Array.from(rows),
  }));

const block = (values: readonly number[]): StimulusBlock => ({
  cycles: values.length,
  rows: Uint32Array.from(values),
  stride: 1,
});
const held = (value: number, cycles: number): StimulusBlock => ({
  cycles,
  rows: Uint32Array.of(value),
  stride: 0,
});

describe('runBlocksSync', () => {
  it('numbers cycles through and keeps the state from block to block', () => {
    const blocks = runBlocksSync(delay(), [block([1, 0, 1]), held(0, 2), block([1])]);
    expect(collected(blocks)).toEqual([
      { firstCycle: 0, cycles: 3, rows: [2, 1, 2] },
      { firstCycle: 3, cycles: 2, rows: [1, 0] },
      { firstCycle: 5, cycles: 1, rows: [2] },
    ]);
  });

  it('holds the last row for the cycles beyond the stimulus', () => {
    const blocks = runBlocksSync(delay(), [block([0, 1])], { cycles: 4 });
    expect(collected(blocks).flatMap((b) => b.rows)).toEqual([0, 2, 3, 3]);
    expect(collected(runBlocksSync(delay(), [], { cycles: 2 }))).toEqual([
      { firstCycle: 0, cycles: 2, rows: [0, 0] },
    ]);
  });

  it('cuts a longer stimulus and asks for no more of it', () => {
    let asked = 0;
    function* endless() {
      for (;;) {
        asked++;
        yield block([1, 1]);
      }
    }
    const blocks = collected(runBlocksSync(delay(), endless(), { cycles: 3 }));
    expect(blocks.map((b) => b.cycles)).toEqual([2, 1]);
    expect(asked).toBe(2);
  });

  it('gives no rows where nobody looks at the response', () => {
    const blocks = collected(runBlocksSync(delay(), [held(1, 5)], { response: false }));
    expect(blocks).toEqual([{ firstCycle: 0, cycles: 5, rows: [] }]);
  });

  it('splits long blocks, so that memory does not grow with the run', () => {
    const blocks = collected(runBlocksSync(delay(), [held(1, 10_000)]));
    expect(blocks.map((b) => b.cycles)).toEqual([4096, 4096, 1808]);
    expect(blocks.flatMap((b) => b.rows)).toEqual([2, ...Array(9999).fill(3)]);
  });

  it('hands out what was completed before a fault, then throws with the cycle of the run', () => {
    const engine = referenceFor(
      smallCircuit({ inputs: ['a'], outputs: ['y'], gates: { y: 'nand a y' } }),
    );
    const seen: number[] = [];
    const run = () => {
      for (const b of runBlocksSync(engine, [block([0, 0]), block([0, 1, 0])])) seen.push(b.cycles);
    };
    let fault: unknown;
    try {
      run();
    } catch (error) {
      fault = error;
    }
    expect(fault).toBeInstanceOf(RunFault);
    expect((fault as RunFault).completed).toBe(3);
    expect(seen).toEqual([2, 1]);
  });

  it('refuses cycles that are no count', () => {
    expect(() => collected(runBlocksSync(delay(), [], { cycles: 1.5 }))).toThrow('got 1.5');
  });
});

describe('runBlocks', () => {
  it('takes a stimulus that arrives in its own time', async () => {
    async function* slow() {
      yield block([1, 0]);
      await Promise.resolve();
      yield block([1]);
    }
    const rows: number[] = [];
    for await (const b of runBlocks(delay(), slow(), { cycles: 4 })) rows.push(...b.rows);
    expect(rows).toEqual([2, 1, 2, 3]);
  });
});

describe('stimulus makers', () => {
  it('hold all inputs at 0', () => {
    const blocks = runBlocksSync(delay(), heldStimulus(delay().layout, 3));
    expect(collected(blocks)).toEqual([{ firstCycle: 0, cycles: 3, rows: [0, 0, 0] }]);
  });

  it('draw the same random rows in blocks as at once', () => {
    const engine = delay();
    const rows = collected(runBlocksSync(engine, randomStimulus(engine.layout, 8, 9000)));
    const expected = responseOf(delay(), 9000, randomRows(engine.layout, 8, 9000));
    expect(rows.flatMap((b) => b.rows)).toEqual(Array.from(expected));
  });

  it('draw without end if asked to', () => {
    const engine = delay();
    const endless = randomStimulus(engine.layout, 8, Number.POSITIVE_INFINITY);
    const blocks = collected(runBlocksSync(engine, endless, { cycles: 5000 }));
    expect(blocks.reduce((sum, b) => sum + b.cycles, 0)).toBe(5000);
  });

  it('keep blocks between one cycle and 64 KiB', () => {
    expect([0, 1, 4, 5, 16384, 20000].map(blockCycles)).toEqual([4096, 4096, 4096, 3276, 1, 1]);
  });
});
