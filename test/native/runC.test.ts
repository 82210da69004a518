import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { emitC } from '../../compiler/native/emitC.js';
import { findCompiler } from '../../compiler/native/findCompiler.js';
import { NativeProgram } from '../../compiler/native/runC.js';
import { smallCircuit } from '../support/smallCircuit.js';

const compiler = findCompiler();
const command = 'command' in compiler ? compiler.command : [];
if ('missing' in compiler) console.log(`native programs are not run here: ${compiler.missing}`);

// A place for temporary files of its own, so that tests beside this one do not matter.
const usualPlace = process.env.TMPDIR;
let place = '';
beforeAll(() => {
  place = mkdtempSync(join(tmpdir(), 'clockstride-test-'));
  process.env.TMPDIR = place;
});
afterAll(() => {
  if (usualPlace === undefined) delete process.env.TMPDIR;
  else process.env.TMPDIR = usualPlace;
  rmSync(place, { recursive: true });
});

/** A program whose output counts cycles modulo 2, from 1. */
function toggling(cycles: number): Promise<NativeProgram> {
  const circuit = smallCircuit({
    inputs: ['clk'],
    outputs: ['q'],
    registers: { q: { clock: 'clk', data: 'n' } },
    gates: { n: 'not q' },
  });
  const emitted = emitC(designOf(circuit), powerUpState(circuit, 'one'));
  if ('obstacle' in emitted) throw new Error(emitted.obstacle);
  const rows = { stimulus: new Uint32Array(0), count: cycles };
  return NativeProgram.build(emitted.text, command, rows);
}

describe.runIf(command.length > 0)('a native program', () => {
  it('starts from the power-up state each time', async () => {
    const program = await toggling(3);
    try {
      expect(Array.from(await program.respond())).toEqual([1, 0, 1]);
      await program.time(8);
      expect(Array.from(await program.respond())).toEqual([1, 0, 1]);
    } finally {
      program.close();
    }
  });

  it('leaves nothing behind', async () => {
    const program = await toggling(1);
    expect(readdirSync(place).length).toBe(1);
    program.close();
    expect(readdirSync(place)).toEqual([]);
  });

  it('leaves nothing behind where the compiler fails, and gives its words', async () => {
    const rows = { stimulus: new Uint32Array(0), count: 1 };
    await expect(
      NativeProgram.build('int main(void) { return x; }', command, rows),
    ).rejects.toThrow(/failed with status 1:.*cycle\.c/s);
    expect(readdirSync(place)).toEqual([]);
  });
});
