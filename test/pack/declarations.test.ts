import { execFile } from 'node:child_process';
import { mkdirSync, symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import { beforeAll, describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { designFrom } from '../support/ownCircuits.js';
import { packageFolder, packInto } from '../support/packages.js';

const netlist = `module mix(input clk, input go, input [7:0] few, input [63:0] \\wide+1 ,
    output bit, output [31:0] word, output [127:0] block);
  reg [63:0] held;
  reg [39:0] \\ra\`m [4:67];
  always @(posedge clk) if (go) \\ra\`m [few[5:0]] <= held;
  always @(posedge clk) if (go) held <= \\wide+1 ;
  assign bit = held[0], word = held[31:0], block = {held, 56'd0, few};
endmodule`;

// Each line below a marker is wrong, and the compiler must say so.
const twoValued = `
import { load, loadInWorker, compile, RunFault, type SavedState } from 'PACKAGE';

const model = await load(await compile(), { powerUp: 'random', seed: 3n, verify: true });
const word: number = model.write({ go: 1, few: 3, 'wide+1': 5n }).step().read('word');
const block: bigint = model.read().block;
const held: bigint = model.peek('held');
const again: number = model.peek('few');
const stored: bigint = model.peek('ra\`m[5]');
const saved: SavedState = model.save();
model.restore(saved).restore(JSON.stringify(saved)).reset();
const { response } = model.run({ cycles: 2, stimulus: { few: new Uint8Array(2) }, response: ['word', 'bit'] });
const column: Uint32Array = response.word;
const { met, cycles } = model.runUntil({ word: 3 }, 10);
model.runUntil((m) => m.read('bit') === 1 && m.cycle > 4, 10);
const end: () => void = model.subscribe((changes, cycle) => void [changes.block, cycle], ['block']);
const worker = await loadInWorker();
const far: number = await worker.read('word');
await worker.run({ cycles: 9 }, { onProgress: (done) => void done, signal: AbortSignal.timeout(5) });
const clock: 'clk' = model.clocks[0]!;
const failed = (error: unknown) => error instanceof RunFault && error.completed === word;
if (failed(1)) end();
export const all = [block, held, stored, again, column, met, cycles, far, clock];

// @ts-expect-error
model.write({ gone: 1 });
// @ts-expect-error
model.write({ few: 1n });
// @ts-expect-error
model.write({ 'wide+1': 1 });
// @ts-expect-error
model.write({ clk: 1 });
// @ts-expect-error
model.write({ go: 'x' });
// @ts-expect-error
model.read('words');
// @ts-expect-error
export const narrow: number = model.read('block');
// @ts-expect-error
model.peek('hold');
// @ts-expect-error
response.block;
// @ts-expect-error
model.peek('ra\`m');
// @ts-expect-error
export const few: number = model.peek('ra\`m[5]');
// @ts-expect-error
model.run({ cycles: 1, unknown: {} });
// @ts-expect-error
model.runUntil({ word: 3 });
// @ts-expect-error
await worker.runUntil(() => true, 3);
// @ts-expect-error
export const early: number = worker.read('word');
// @ts-expect-error
await load(undefined, { powerUp: 'unknown' });
`;

const threeValued = `
import { load } from 'PACKAGE';

const model = await load(undefined, { powerUp: 'unknown' });
model.write({ go: 'x', few: '0b0000000x', 'wide+1': 3n });
const bit: number | 'x' = model.read('bit');
const word = model.read('word');
export const known: number = typeof word === 'string' ? 0 : word;
const { unknown } = model.run({ cycles: 1, unknown: { go: Uint8Array.of(1) } });
export const all = [bit, unknown.word[0]];

// @ts-expect-error
export const sure: number = word;
// @ts-expect-error
model.write({ few: 'x' });
// @ts-expect-error
model.write({ go: 'z' });
`;

const names = `module names(input clk, input constructor, input [7:0] __proto__, input \\a"[3]*/ ,
    output [39:0] toString, output then);
  assign then = constructor, toString = __proto__ + \\a"[3]*/ ;
endmodule`;

// Members that all objects have are no values of ports.
const namedTwice = `
import { load, loadInWorker } from 'PACKAGE';

const model = await load();
model.write({}).write({ constructor: 1 }).write({ ['__proto__']: 3, 'a"[3]*/': 1 });
model.runUntil({ then: 1 }, 3);
model.run({ cycles: 1, stimulus: { 'a"[3]*/': Uint8Array.of(1) }, response: ['then'] });
export const wide: bigint = model.read().toString;
const worker = await loadInWorker();
export const then: number = (await worker.read()).then;

// @ts-expect-error
model.write({ constructor: '1' });
// @ts-expect-error
model.write({ then: 1 });
// @ts-expect-error
model.runUntil({ toString: 1 }, 3);
// @ts-expect-error
model.run({ cycles: 1, stimulus: { constructor: [1] } });
`;

const lanes = `
import { load, type EachLane, type SavedState } from 'PACKAGE';

const model = await load(undefined, { powerUp: 'random', seed: 3 });
const count: 32 = model.lanes;
const word: number = model.write({ go: 1 }).write({ few: 3 }, 5).step().read('word', 5);
const blocks: EachLane<bigint> = model.read().block;
const block: bigint = model.read(31).block;
const held: readonly bigint[] = model.peek('held');
const states: readonly SavedState[] = model.save();
model.restore(states).restore(model.save(3), 4).restore(JSON.stringify(states[0])).reset(4).reset();
const few = [new Uint8Array(2), new Uint8Array(2)];
const { response } = model.run({ cycles: 2, stimulus: { few, go: new Uint8Array(2) }, response: ['word'] });
const column: Uint32Array = response.word[31]!;
const { met, first } = model.runUntil({ word: 3 }, 10);
const after: number | undefined = first[5];
export const all = [count, word, blocks, block, held, column, met, after, model.faults[0]?.lane];

// @ts-expect-error
model.write({ gone: 1 }, 5);
// @ts-expect-error
model.write({ few: 1n }, 5);
// @ts-expect-error
export const wide: number = model.read('block', 5);
// @ts-expect-error
model.read(5, 'block');
// @ts-expect-error
response.block;
// @ts-expect-error
model.run({ cycles: 1, stimulus: { few: [1] } });
// @ts-expect-error
model.runUntil((m) => true, 3);
// @ts-expect-error
model.restore(states, 4);
`;

const root = packageFolder();
const consumers = { mix: twoValued, mix3: threeValued, names: namedTwice, lanes };
const tsc = fileURLToPath(new URL('../../node_modules/typescript/bin/tsc', import.meta.url));

beforeAll(async () => {
  const { circuit } = designFrom(new Source('mix.v', netlist));
  const npmName = (name: string) => ({ npmName: { name, version: '1.0.0' } });
  await packInto(join(root, 'mix'), designOf(circuit), npmName('mix'));
  await packInto(join(root, 'mix3'), designOf(circuit, { threeValued: true }), npmName('mix3'));
  await packInto(join(root, 'names'), designFrom(new Source('names.v', names)), npmName('names'));
  const withoutMemory = designFrom(new Source('mix.v', netlist.replace(/^.*ra`m.*$/gm, '')));
  await packInto(join(root, 'lanes'), withoutMemory, { ...npmName('lanes'), lanes: 32 });
  mkdirSync(join(root, 'node_modules'));
  for (const [name, text] of Object.entries(consumers)) {
    symlinkSync(join(root, name), join(root, 'node_modules', name));
    writeFileSync(join(root, `${name}ByFile.mts`), text.replace('PACKAGE', `./${name}/model.mjs`));
    writeFileSync(join(root, `${name}ByName.mts`), text.replace('PACKAGE', name));
  }
});

describe('the types of a package', () => {
  it.each([
    ['nodenext', 'nodenext'],
    ['esnext', 'bundler'],
  ])(
    'take what is right and refuse what is wrong, in modules of %s',
    async (module, resolution) => {
      const files = Object.keys(consumers).flatMap((n) => [`${n}ByFile.mts`, `${n}ByName.mts`]);
      const options = ['--strict', '--noEmit', '--target', 'es2022', '--lib', 'es2022,dom'];
      const kind = ['--module', module, '--moduleResolution', resolution, '--types', ''];
      const args = [tsc, ...options, ...kind, '--exactOptionalPropertyTypes', ...files];
      const run = promisify(execFile)(process.execPath, args, { cwd: root });
      await expect(run.catch(({ stdout }) => ({ stdout }))).resolves.toMatchObject({ stdout: '' });
    },
  );
});
