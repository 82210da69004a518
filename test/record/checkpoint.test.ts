import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decodeCheckpoint, encodeCheckpoint } from '../../compiler/record/checkpoint.js';
import { DamagedFile } from '../../compiler/record/sealedText.js';
import type { RunStart } from '../../compiler/run/runRecorder.js';

const words = fc.uint32Array({ maxLength: 5 });

const moments = (threeValued: boolean): fc.Arbitrary<RunStart> =>
  fc.record({
    cycle: fc.maxSafeNat(),
    point: fc.record({
      state: fc.uint8Array({ max: threeValued ? 2 : 1, maxLength: 70 }),
      memory: fc.uint8Array({ maxLength: 40 }),
      before: fc.option(words, { nil: undefined }),
      position: fc.nat(9),
    }),
    outlets: fc.array(
      fc.oneof(
        words,
        fc.uint8Array({ maxLength: 9 }),
        fc.record({ count: fc.nat(), first: words }),
      ),
    ),
  });

const contextOf = ({ point }: RunStart, threeValued: boolean) => ({
  record: 'some record',
  stateCount: point.state.length,
  threeValued,
});

describe('a checkpoint', () => {
  it.each([false, true])('comes back as it was written (three-valued: %s)', (threeValued) =>
    fc.assert(
      fc.asyncProperty(moments(threeValued), async (moment) => {
        const context = contextOf(moment, threeValued);
        const bytes = await encodeCheckpoint(moment, context);
        expect(await decodeCheckpoint('c', bytes, context)).toEqual(moment);
      }),
      { seed: 20260419, numRuns: 60 },
    ),
  );

  const [moment] = fc.sample(moments(true), { seed: 7, numRuns: 1 });
  const context = contextOf(moment!, true);

  it('is refused where any byte of it is another one', async () => {
    const bytes = await encodeCheckpoint(moment!, context);
    for (let at = 0; at < bytes.length; at++) {
      for (const change of [1, 0x20, 0x80]) {
        const damaged = Uint8Array.from(bytes);
        damaged[at]! ^= change;
        await expect(decodeCheckpoint('c', damaged, context), `byte ${at}`).rejects.toThrow(
          DamagedFile,
        );
      }
    }
  });

  it('is refused where it ends early or goes on', async () => {
    const bytes = await encodeCheckpoint(moment!, context);
    for (let length = 0; length < bytes.length; length++) {
      const torn = bytes.subarray(0, length);
      await expect(decodeCheckpoint('c', torn, context)).rejects.toThrow(DamagedFile);
    }
    const longer = Uint8Array.from([...bytes, 0]);
    await expect(decodeCheckpoint('c', longer, context)).rejects.toThrow(DamagedFile);
  });

  it('is refused by another record', async () => {
    const bytes = await encodeCheckpoint(moment!, context);
    const other = { ...context, record: 'another record' };
    await expect(decodeCheckpoint('c', bytes, other)).rejects.toThrow('belongs to another record');
  });
});
