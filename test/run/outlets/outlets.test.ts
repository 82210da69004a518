import { describe, expect, it } from 'vitest';
import { designOf } from '../../../compiler/compile.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import type { Outlet, OutletPlan } from '../../../compiler/run/outlets/outlet.js';
import { runDesign } from '../../../compiler/run/runDesign.js';
import { heldStimulus } from '../../../runtime/stream.js';

const text = `
module count (input clk, output reg [15:0] n = 0);
  wire [15:0] next = n + 1;
  always @(posedge clk) n <= next;
endmodule
`;
const design = designOf(readNetlist([new Source('c.v', text)], {}, new Diagnostics())!);

/** Writes down what it is given. */
class Recorder implements Outlet {
  readonly wantsResponse: boolean = true;
  readonly blocks: [firstCycle: number, cycles: number, words: number][] = [];
  readonly calls: string[] = [];
  interest: 'none' | 'lost' | undefined;
  readonly #options: Partial<Pick<Outlet, 'take' | 'finish'>>;

  constructor(options: Partial<Pick<Outlet, 'take' | 'finish'>> = {}) {
    this.#options = options;
  }

  take(block: Parameters<Outlet['take']>[0]) {
    this.blocks.push([block.firstCycle, block.cycles, block.rows.length]);
    return this.#options.take?.(block);
  }

  finish(end: Parameters<Outlet['finish']>[0]) {
    this.calls.push(`finish ${end.cycles}`);
    return this.#options.finish?.(end) ?? {};
  }

  keep(): void {
    this.calls.push('keep');
  }

  discard(): void {
    this.calls.push('discard');
  }
}

const stopAt = (lastCycle: number, reason: string): Recorder =>
  new Recorder({
    take: ({ firstCycle, cycles }) =>
      lastCycle >= firstCycle && lastCycle < firstCycle + cycles
        ? { lastCycle, reason }
        : undefined,
  });

const run = (...outlets: (Outlet | OutletPlan)[]) =>
  runDesign(design, {
    stimulus: heldStimulus(design.layout, 10_000),
    ...{ engine: 'bytecode', powerUp: 'zero', seed: 0 },
    outlets: outlets.map((each) => ('open' in each ? each : { open: () => each })),
  });

describe('outlets', () => {
  it('are each given all cycles in order, finished, kept and let go', async () => {
    const [one, other] = [new Recorder(), new Recorder()];
    const { cycles } = await run(one, other);
    expect(cycles).toBe(10_000);
    for (const { blocks, calls } of [one, other]) {
      expect(blocks).toEqual([
        ...[
          [0, 4096, 4096],
          [4096, 4096, 4096],
          [8192, 1808, 1808],
        ],
      ]);
      expect(calls).toEqual(['finish 10000', 'keep', 'discard']);
    }
  });

  it('end a run for those behind them, the earliest end counting', async () => {
    const last = new Recorder();
    const { cycles, stopped } = await run(stopAt(5000, 'late'), stopAt(4999, 'early'), last);
    expect(cycles).toBe(5000);
    expect(stopped).toEqual({ cycle: 4999, reason: 'early' });
    expect(last.blocks).toEqual([
      [0, 4096, 4096],
      [4096, 904, 904],
    ]);
    const other = await run(stopAt(4999, 'early'), stopAt(5000, 'late'));
    expect(other.stopped).toEqual({ cycle: 4999, reason: 'early' });
  });

  it('join what they find: notes in order, the earliest mismatch, the sum of mismatches', async () => {
    const found = (cycle: number, mismatches: number) =>
      new Recorder({
        finish: () => ({
          mismatch: { cycle, port: 'n', expected: '1', actual: '0' },
          ...{ mismatches, notes: [`note ${cycle}`] },
        }),
      });
    const summary = await run(found(7, 2), found(3, 4), new Recorder(), found(5, 1));
    expect(summary.mismatch!.cycle).toBe(3);
    expect(summary.mismatches).toBe(7);
    expect(summary.notes).toEqual(['note 7', 'note 3', 'note 5']);
  });

  it('end a run in which nobody is interested any more', async () => {
    const lost = new Recorder({
      take: () => {
        lost.interest = 'lost';
        return undefined;
      },
    });
    const indifferent = new Recorder();
    indifferent.interest = 'none';
    expect((await run(lost, indifferent)).cycles).toBe(4096);
    expect((await run(indifferent)).cycles).toBe(10_000);
    expect((await run(lost, new Recorder())).cycles).toBe(10_000);
  });

  it('are let go and not kept where one throws, when it opens, takes or finishes', async () => {
    const oh = () => {
      throw new Error('oh');
    };
    for (const bad of [{ open: oh }, new Recorder({ take: oh }), new Recorder({ finish: oh })]) {
      const other = new Recorder();
      await expect(run(other, bad)).rejects.toThrow('oh');
      expect(other.calls.at(-1)).toBe('discard');
      expect(other.calls).not.toContain('keep');
    }
  });

  it('see nets beside the response, each its own', async () => {
    const { netNames } = namesOf();
    const seen: number[][] = [];
    const watching = (names: readonly string[]): OutletPlan => ({
      watch: names.map((name) => netNames.get(name)!),
      open: ({ watched }) =>
        new Recorder({
          take: ({ rows, watched: words, firstCycle, cycles }) => {
            const row = cycles - 1;
            const value =
              words[row * watched.stride + watched.firstWord]! & (2 ** names.length - 1);
            if (firstCycle === 0) seen.push([rows[row]!, value]);
            return undefined;
          },
        }),
    });
    const bits = (name: string, count: number) =>
      Array.from({ length: count }, (_, bit) => `${name}[${bit}]`);
    await run(watching(bits('n', 12)), watching(['n[0]']), watching(bits('n', 16)));
    // Cycle 4095 is the last of the first block.
    expect(seen).toEqual([
      [4095, 4095],
      [4095, 1],
      [4095, 4095],
    ]);
  });

  it('see flags as bits of one word, whatever else is watched', async () => {
    const { netNames } = namesOf();
    const seen: number[][] = [];
    const flagging = (count: number): OutletPlan => ({
      flags: Array.from({ length: count }, (_, bit) => netNames.get(`n[${bit % 12}]`)!),
      open: ({ watched: { flagWord, flagBit, stride } }) =>
        new Recorder({
          take: ({ rows, watched, cycles, firstCycle }) => {
            const row = Math.min(cycles - 1, 5);
            const flags = watched[row * stride + flagWord]! >>> flagBit;
            if (firstCycle === 0) seen.push([rows[row]!, (flags & (2 ** count - 1)) >>> 0]);
            return undefined;
          },
        }),
    });
    const watching: OutletPlan = { watch: [netNames.get('n[0]')!], open: () => new Recorder() };
    await run(flagging(3), watching, flagging(1), flagging(31));
    const repeated = [0, 12, 24].reduce((sum, place) => sum + 5 * 2 ** place, 0);
    expect(seen).toEqual([
      [5, 5],
      [5, 1],
      [5, repeated],
    ]);
  });
});

/** Nets by the names of output bits. */
function namesOf(): { netNames: Map<string, number> } {
  const { outputs } = design.circuit;
  const pairs = outputs.flatMap(({ name, nets }) =>
    Array.from(nets, (net, bit): [string, number] => [`${name}[${bit}]`, net]),
  );
  return { netNames: new Map(pairs) };
}
