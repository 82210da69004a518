import { spawn } from 'node:child_process';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { setTimeout } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { circuits } from '../../benchmarks/circuits/index.js';
import {
  isIntact,
  recordedResponse,
  type SavedResponse,
} from '../../compiler/record/recordedResponse.js';
import { FolderFiles } from '../../compiler/record/recordFiles.js';
import { RunRecord } from '../../compiler/record/runRecord.js';
import { signResponse } from '../../compiler/run/outlets/signResponse.js';
import type { RunStart } from '../../compiler/run/runRecorder.js';
import { ownDesign } from '../support/ownCircuits.js';
import { freshPath, play } from './recordings.js';

const lock = ownDesign('lock');
const CYCLES = 1_500_000;

const netlist = `${freshPath()}.v`;
writeFileSync(netlist, [...circuits.find(({ name }) => name === 'lock')!.write()].join(''));

const outlets = (target: string) => () => [
  signResponse(),
  recordedResponse(target, { every: 100, mark: 'victim' }),
];

const wholeTarget = `${freshPath()}.csv`;
const whole = play({ design: lock, cycles: CYCLES, outlets: outlets(wholeTarget), engine: 'wasm' });

/** Starts a recorded run, and kills it at some moment after its first checkpoints. */
async function killedRun(folder: string, checkpoints: number): Promise<void> {
  const victim = fileURLToPath(new URL('./victim.mjs', import.meta.url));
  const child = spawn(process.execPath, [victim, netlist, folder, `${CYCLES}`]);
  const ended = new Promise((resolve) => child.once('close', (_, signal) => resolve(signal)));
  const found = () => readdirSync(folder).filter((name) => name.startsWith('checkpoint-'));
  while (!existsSync(folder) || found().length < checkpoints) await setTimeout(1);
  await setTimeout(Math.random() * 50);
  child.kill('SIGKILL');
  expect(await ended).toBe('SIGKILL');
}

describe('a run that is killed', () => {
  it.each([1, 2, 2])('after %d checkpoints or so goes on to the same end', async (checkpoints) => {
    const folder = freshPath();
    await killedRun(folder, checkpoints);
    const record = await RunRecord.open(new FolderFiles(folder));
    expect((await record.check()).damaged).toEqual([]);
    const target = `${folder}.csv`;
    let from: RunStart | undefined;
    for await (const moment of record.before(CYCLES)) {
      from = moment;
      break;
    }
    // Written before the checkpoint was: all of it must be there.
    expect(isIntact(target, 'victim', from!.outlets[1] as SavedResponse)).toBe(true);
    const run = { design: lock, cycles: CYCLES, outlets: outlets(target), engine: 'wasm' as const };
    const { signature } = await play(run, { from: from! });
    expect(signature).toBe((await whole).signature);
    expect(readFileSync(target, 'utf8')).toBe(readFileSync(wholeTarget, 'utf8'));
  });
});
