import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { checkPackage, PackageDeparture } from '../../compiler/pack/check.js';
import { keptNets } from '../../compiler/pack/keptNets.js';
import { resetPorts } from '../../compiler/pack/resets.js';
import { ownDesign } from '../support/ownCircuits.js';
import { packageFolder, packInto } from '../support/packages.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';

const root = packageFolder();
const SEED = 20260801;

const kinds: readonly (readonly [string, RandomCircuitOptions, boolean, boolean])[] = [
  ['registers', { asynchronous: true }, false, false],
  ['registers with x', { asynchronous: true, unknowns: true }, true, false],
  ['latches and loops', { latches: true, loops: true }, false, false],
  ['latches and loops with x', { latches: true, loops: true }, true, false],
  ['gated clocks', { clocking: 'gated', asynchronous: true }, false, false],
  ['two clocks with paces of their own', { clocking: 'twoClocks' }, true, true],
];

it.each(kinds)(
  'packages of random circuits agree in all nets: %s',
  async (name, options, threeValued, pace) => {
    const circuits = fc.sample(randomCircuit(options), { seed: SEED, numRuns: 2 });
    const timings = [
      { port: 'clk', period: 2, offset: 0 },
      { port: 'clk2', period: 3, offset: 1 },
    ];
    let compared = 0;
    for (const [i, circuit] of circuits.entries()) {
      const design = designOf(circuit, { threeValued, ...(pace && { timings }) });
      const folder = join(root, `${name} ${i}`);
      // Throws where the package, run by its own files, departs from the reference.
      const { check } = await packInto(folder, design, { keepNames: 'all' });
      compared += check.cycles;
    }
    // Some of the loops never settle.
    expect(compared).toBeGreaterThan(0);
  },
);

it('a package of another circuit is found to depart', async () => {
  const [lock, other] = [ownDesign('lock'), ownDesign('lock', { gate: 3 })];
  const output = join(root, 'other');
  await packInto(output, other);
  const kept = keptNets(lock, 'ports');
  const resets = resetPorts(lock.circuit);
  const check = checkPackage(output, { design: lock, kept, resets });
  await expect(check).rejects.toThrow(PackageDeparture);
  await expect(check).rejects.toThrow(/^the package departs from the reference at cycle \d+, /);
});

it('a package whose module was changed does not load in the check', async () => {
  const lock = ownDesign('lock');
  await packInto(join(root, 'whole'), lock);
  const folder = join(root, 'damaged');
  mkdirSync(folder);
  for (const file of ['model.mjs', 'model.wasm']) {
    const content = readFileSync(join(root, 'whole', file));
    if (file === 'model.wasm') content[content.length - 1]! ^= 1;
    writeFileSync(join(folder, file), content);
  }
  const kept = keptNets(lock, 'ports');
  const check = checkPackage(folder, { design: lock, kept, resets: [] });
  await expect(check).rejects.toThrow(/expected a module with SHA-256/);
});
