import { join } from 'node:path';
import fc from 'fast-check';
import { expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { importLanes, packageFolder, packInto } from '../support/packages.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { smallCircuit } from '../support/smallCircuit.js';

const root = packageFolder();
const SEED = 20261201;

it('agrees with the reference on random circuits, with paced clocks and loops', async () => {
  const timings = [
    { port: 'clk', period: 2, offset: 0 },
    { port: 'clk2', period: 3, offset: 1 },
  ];
  const kinds = [
    [{ clocking: 'twoClocks', asynchronous: true }, { timings }, 32],
    [{ latches: true, loops: true }, {}, 128],
    [{ asynchronous: true, unknowns: true }, { threeValued: true }, 64],
  ] as const;
  for (const [i, [options, design, lanes]] of kinds.entries()) {
    const [circuit] = fc.sample(randomCircuit(options), { seed: SEED + i, numRuns: 1 });
    // Throws where a lane, run by the package's own files, departs from its reference.
    const { check } = await packInto(join(root, `${i}`), designOf(circuit!, design), {
      keepNames: 'all',
      lanes,
    });
    expect(check.lanes).toEqual([0, 1, lanes / 2, lanes - 1]);
  }
});

it('a lane without result ends, and the others go on', async () => {
  const ring = smallCircuit({
    inputs: ['clk', 'go'],
    outputs: ['y', 'z', 'q'],
    registers: { q: { clock: 'clk', data: 'go' } },
    gates: { y: 'nand y q', z: 'nand z go' },
  });
  await packInto(join(root, 'ring'), designOf(ring), { lanes: 32 });
  const { load, RunFault } = await importLanes(join(root, 'ring'));
  const lanes = await load();
  lanes.step(2).write({ go: 1 }, 7);
  // It has no result with these inputs, and has not ended yet.
  expect(() => lanes.read('z', 7)).toThrow(RunFault);
  expect([lanes.read('z')[7], lanes.read('z')[8], lanes.faults]).toEqual([undefined, 1, []]);
  expect([lanes.save(7).cycle, lanes.save()[7]?.cycle]).toEqual([2, 2]);
  const stimulus = {
    go: Array.from({ length: 32 }, (_, i) => Uint8Array.of(0, Number(i === 7), 0)),
  };
  const { response } = lanes.run({ cycles: 3, stimulus });
  expect(lanes.faults).toMatchObject([{ lane: 7, cycle: 3 }]);
  expect(lanes.faults[0]!.message).toMatch(/^a loop does not settle: [yz]$/);
  expect([response.z![7], response.z![8]]).toEqual([
    Uint32Array.of(1, 0, 0),
    Uint32Array.of(1, 1, 1),
  ]);
  for (const act of [() => lanes.read(7), () => lanes.peek('q', 7), () => lanes.save(7)]) {
    expect(act).toThrow(RunFault);
  }
  expect([lanes.read('y')[7], lanes.read('y')[8]]).toEqual([undefined, 1]);
  expect([lanes.save()[7], lanes.save()[8]?.cycle]).toEqual([undefined, 5]);
  expect(lanes.runUntil({ y: 1 }, 5)).toMatchObject({ met: false, cycles: 0 });
  lanes.reset(7);
  expect([lanes.faults, lanes.read('y', 7)]).toEqual([[], 1]);
});

it('takes states only at a place in the pattern of the clocks where the lanes stand', async () => {
  const circuit = smallCircuit({
    inputs: ['a', 'b', 'd'],
    outputs: ['q'],
    registers: { q: { clock: 'a', data: 'd' }, r: { clock: 'b', data: 'q' } },
    gates: {},
  });
  const timings = [
    { port: 'a', period: 2, offset: 0 },
    { port: 'b', period: 6, offset: 1 },
  ];
  await packInto(join(root, 'paced'), designOf(circuit, { timings }), { lanes: 32 });
  const { load } = await importLanes(join(root, 'paced'));
  const lanes = await load();
  const early = lanes.step().save(0);
  lanes.step();
  expect(() => lanes.restore(early, 4)).toThrow(
    'expected a state of a cycle that is 2 more than a multiple of 3',
  );
  expect(() => lanes.reset(4)).toThrow('got cycle 0');
  expect(lanes.step(2).restore(early, 4).save(4)).toEqual(early);
  expect(lanes.restore(early).save(31)).toEqual(early);
});
