import { copyFileSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { Source } from '../../compiler/diagnostics/source.js';
import { lockRecord, RecordBusy } from '../../compiler/record/lock.js';
import {
  isIntact,
  recordedResponse,
  type SavedResponse,
} from '../../compiler/record/recordedResponse.js';
import { Recorder } from '../../compiler/record/recorder.js';
import { FolderFiles, type RecordFiles } from '../../compiler/record/recordFiles.js';
import { RunRecord } from '../../compiler/record/runRecord.js';
import { compareFile } from '../../compiler/run/outlets/compareFile.js';
import { signResponse } from '../../compiler/run/outlets/signResponse.js';
import type { RunStart } from '../../compiler/run/runRecorder.js';
import type { RunSummary } from '../../compiler/run/runSummary.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import {
  BlockRecorder,
  freshPath,
  freshRecord,
  momentsOf,
  play,
  type TestRun,
} from './recordings.js';

const lock = ownDesign('lock');

// Drivers that disagree in some cycles: what watches buses must go on, too.
const bus = designFrom(
  new Source(
    'bus.v',
    `module bus(input clk, input a, input b, input ea, input eb, output w, output reg q);
       bufif1 (w, a, ea); bufif1 (w, b, eb); always @(posedge clk) q <= w ^ q;
     endmodule`,
  ),
);

const CYCLES = 50_000;

/** A summary without what differs from run to run. */
const essence = ({ seconds, cyclesPerSecond, engine, ...rest }: RunSummary) => rest;

const signed = (design = lock): TestRun => ({
  design,
  cycles: CYCLES,
  outlets: () => [signResponse()],
});

describe('a recorded run', () => {
  it.each([
    ['a lock', lock],
    ['a bus', bus],
  ])(
    'of %s comes to the same end from each of its checkpoints, on any engine',
    async (_, design) => {
      const run = signed(design);
      const whole = await play(run);
      const record = await freshRecord(design);
      expect(essence(await play(run, { recorder: new BlockRecorder(record) }))).toEqual(
        essence(whole),
      );
      const moments = await momentsOf(record);
      expect(moments.length).toBeGreaterThan(3);
      for (const i of [0, 1, 3]) {
        const from = moments[i]!;
        const engine = i % 2 === 0 ? 'wasm' : 'bytecode';
        expect(essence(await play({ ...run, engine }, { from }))).toEqual(essence(whole));
      }
    },
  );

  it('counts departures on, and tells the first of all', async () => {
    const expected = freshPath();
    const rows = Array.from({ length: 200 }, (_, i) => `${250 * i},${i % 3}`);
    writeFileSync(expected, `cycle,horn\n${rows.join('\n').replaceAll(/,2/g, ',-')}\n`);
    const outlets = () => [compareFile(expected, { all: true, form: 'csv' })];
    const run: TestRun = { design: lock, cycles: CYCLES, outlets };
    const whole = await play(run);
    expect(whole.mismatches).toBeGreaterThan(10);
    const record = await freshRecord(lock);
    await play(run, { recorder: new BlockRecorder(record) });
    for (const from of (await momentsOf(record)).slice(0, 3)) {
      expect(essence(await play(run, { from }))).toEqual(essence(whole));
    }
  });

  it.each([{}, { changes: true }, { every: 7, changes: true }])(
    'goes on with its response where it was cut off (%o)',
    async (choice) => {
      const target = freshPath();
      const outlets = () => [recordedResponse(target, { ...choice, form: 'csv', mark: 'test' })];
      const run: TestRun = { design: lock, cycles: 20_000, outlets };
      const record = await freshRecord(lock);
      await play(run, { recorder: new BlockRecorder(record) });
      const whole = readFileSync(target, 'utf8');
      for (const from of await momentsOf(record)) {
        // The file has its name already, and is taken back.
        expect(isIntact(target, 'test', from.outlets[0] as SavedResponse)).toBe(true);
        await play(run, { from });
        expect(readFileSync(target, 'utf8')).toBe(whole);
      }
    },
  );

  it('knows a response that is not there as it was', async () => {
    const target = freshPath();
    const outlets = () => [recordedResponse(target, { form: 'csv', mark: 'test' })];
    const record = await freshRecord(lock);
    await play({ design: lock, cycles: 20_000, outlets }, { recorder: new BlockRecorder(record) });
    const [newest] = await momentsOf(record);
    const saved = newest!.outlets[0] as SavedResponse;
    const text = readFileSync(target);
    text[1000]! ^= 1;
    writeFileSync(target, text);
    expect(isIntact(target, 'test', saved)).toBe(false);
    writeFileSync(target, text.subarray(0, 2000));
    expect(isIntact(target, 'test', saved)).toBe(false);
  });
});

/** Files of a record on a disk that is full at times. */
class FullDisk implements RecordFiles {
  writes = 0;
  readonly #files: FolderFiles;
  readonly #isFull: (write: number) => boolean;

  constructor(files: FolderFiles, isFull: (write: number) => boolean) {
    this.#files = files;
    this.#isFull = isFull;
  }

  get path(): string {
    return this.#files.path;
  }

  names = (): Promise<string[]> => this.#files.names();
  read = (name: string): Promise<Uint8Array> => this.#files.read(name);
  remove = (name: string): Promise<void> => this.#files.remove(name);

  async write(name: string, bytes: Uint8Array): Promise<void> {
    if (this.#isFull(this.writes++)) throw new Error('ENOSPC: no space left on device, write');
    await this.#files.write(name, bytes);
  }
}

/** Moments of a run of the lock, one further than the other. */
async function momentsOfRun(): Promise<RunStart[]> {
  const record = await freshRecord(lock);
  await play(signed(), { recorder: new BlockRecorder(record) });
  return (await momentsOf(record)).reverse();
}

/** Hands moments to a recorder, each when it takes one. */
async function hand(recorder: Recorder, disk: FullDisk, moments: readonly RunStart[]) {
  for (const moment of moments) {
    const { writes } = disk;
    while (disk.writes === writes) {
      recorder.after(() => moment);
      await recorder.settled();
    }
  }
}

async function recorderOn(isFull: (write: number) => boolean) {
  const folder = new FolderFiles(freshPath());
  await folder.make();
  const disk = new FullDisk(folder, isFull);
  const told: string[] = [];
  const record = await freshRecord(lock, disk);
  return { folder, disk, told, recorder: new Recorder(record, (text) => told.push(text), 0) };
}

describe('a disk that is full', () => {
  it('costs the checkpoints that do not fit, and is told of once', async () => {
    const { folder, disk, told, recorder } = await recorderOn((write) => write > 4);
    const [first, ...others] = await momentsOfRun();
    await recorder.begin(() => first!);
    await hand(recorder, disk, others);
    const summary = await play(signed());
    expect(await recorder.end(summary, others.at(-1))).toEqual([
      expect.stringMatching(/^\d+ times the record could not be written; its newest checkpoint/),
    ]);
    expect(told).toEqual([
      expect.stringContaining('no space left on device, write; the run goes on'),
    ]);
    const again = await RunRecord.open(folder);
    expect(await again.result()).toBeUndefined();
    expect((await again.check()).damaged).toEqual([]);
    const [from] = await momentsOf(again);
    expect(from).toEqual(others[2]);
    expect((await play(signed(), { from: from! })).signature).toBe(summary.signature);
  });

  it('is no loss once there is room again', async () => {
    const { folder, disk, recorder } = await recorderOn((write) => write > 2 && write < 6);
    const [first, ...others] = await momentsOfRun();
    await recorder.begin(() => first!);
    await hand(recorder, disk, others);
    const summary = await play(signed());
    await recorder.end(summary, others.at(-1));
    const again = await RunRecord.open(folder);
    expect(again.cycles.at(-1)).toBe(CYCLES);
    expect((await again.result())?.signature).toBe(summary.signature);
  });

  it('refuses a run of which nothing could be kept', async () => {
    const { recorder } = await recorderOn((write) => write > 0);
    await expect(play(signed(), { recorder })).rejects.toThrow('no space left');
  });
});

describe('damage to a record', () => {
  it('shows wherever a byte of any file is another one', async () => {
    const record = await freshRecord(lock);
    await play({ ...signed(), cycles: 9000 }, { recorder: new BlockRecorder(record) });
    const names = readdirSync(record.path);
    expect(names.length).toBeGreaterThan(3);
    const copy = freshPath();
    mkdirSync(copy);
    for (const name of names) copyFileSync(join(record.path, name), join(copy, name));
    for (const name of names) {
      const bytes = readFileSync(join(copy, name));
      // Every byte of each form is tried beside it; here, that every file is looked at.
      for (let at = 0; at < bytes.length; at += 7) {
        const damaged = Uint8Array.from(bytes);
        damaged[at]! ^= 1 << (at % 8);
        writeFileSync(join(copy, name), damaged);
        const found = await RunRecord.open(new FolderFiles(copy)).then(
          async (opened) => (await opened.check()).damaged.map(({ message }) => message),
          (error: Error) => [error.message],
        );
        expect(found, `byte ${at} of ${name}`).toHaveLength(1);
        expect(found[0]).toContain(name);
      }
      writeFileSync(join(copy, name), bytes);
    }
    expect(await (await RunRecord.open(new FolderFiles(copy))).check()).toEqual({
      damaged: [],
      strange: [],
    });
  });

  it('costs no more than the last interval', async () => {
    const record = await freshRecord(lock);
    await play(signed(), { recorder: new BlockRecorder(record) });
    const [newest, before] = await momentsOf(record);
    const name = `checkpoint-${String(newest!.cycle).padStart(16, '0')}.bin`;
    const bytes = readFileSync(join(record.path, name));
    writeFileSync(join(record.path, name), bytes.subarray(0, bytes.length / 2));
    const told: string[] = [];
    for await (const moment of record.before(CYCLES, ({ message }) => told.push(message))) {
      expect(moment.cycle).toBe(before!.cycle);
      break;
    }
    expect(told).toEqual([`${name}: it is not as it was written`]);
  });
});

describe('the lock of a record', () => {
  it('keeps others off, but not for longer than its process lives', () => {
    const folder = freshPath();
    mkdirSync(folder);
    // Process 1 lives as long as the machine runs; no process has the highest number.
    writeFileSync(join(folder, 'lock'), '1\n');
    expect(() => lockRecord(folder)).toThrow(RecordBusy);
    writeFileSync(join(folder, 'lock'), `${2 ** 22 + 1}\n`);
    const unlock = lockRecord(folder);
    expect(readFileSync(join(folder, 'lock'), 'utf8')).toBe(`${process.pid}\n`);
    unlock();
    expect(readdirSync(folder)).toEqual([]);
  });
});
