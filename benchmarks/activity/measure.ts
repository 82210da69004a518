/*
 * What counting the activity of every net costs beside a run without: `npx tsx
 * benchmarks/activity/measure.ts NETLIST...`. Both take turns; the fastest of five rounds counts.
 */
import { readFileSync } from 'node:fs';
import { basename } from 'node:path';
import { countActivity } from '../../compiler/activity/countActivity.js';
import { designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import type { OutletPlan } from '../../compiler/run/outlets/outlet.js';
import { runDesign } from '../../compiler/run/runDesign.js';
import { followStates } from '../../compiler/states/followStates.js';
import { stateVectors } from '../../compiler/states/stateVectors.js';
import { signalsOf } from '../../compiler/waveform/signalList.js';
import { randomStimulus } from '../../runtime/stream.js';

const ROUNDS = 5;
const SECONDS = 0.5;
const emitter = localEmitter();

for (const path of process.argv.slice(2)) {
  const source = new Source(path, readFileSync(path));
  const circuit = readNetlist([source], {}, new Diagnostics())!;
  const design = designOf(circuit);
  const list = signalsOf(circuit, []);
  const first = circuit.outputs[0]!.name;
  const counting = () =>
    countActivity(design, { list, emitter, window: { from: 0, to: Number.POSITIVE_INFINITY } });
  const kinds: Record<string, () => OutletPlan[]> = {
    plain: () => [],
    activity: () => [counting()],
    states: () => [followStates(stateVectors(circuit, [first]))],
  };
  const timed = async (plans: OutletPlan[], cycles: number) => {
    const stimulus = randomStimulus(design.layout, 7, cycles);
    const request = { stimulus, engine: 'wasm', powerUp: 'zero', seed: 0, emitter } as const;
    return (1e9 * (await runDesign(design, { ...request, outlets: plans })).seconds) / cycles;
  };
  const best = new Map<string, number>();
  const cycles = Math.ceil((SECONDS * 1e9) / (await timed([], 50_000)));
  for (let round = 0; round < ROUNDS; round++) {
    for (const [kind, plans] of Object.entries(kinds)) {
      const ns = await timed(plans(), cycles);
      best.set(kind, Math.min(ns, best.get(kind) ?? ns));
    }
  }
  const [plain, activity, states] = [...best.values()];
  const nets = new Set(list.nets).size;
  console.log(
    `${basename(path)}: ${nets} nets, ${plain!.toFixed(1)} ns/cycle; with activity ` +
      `${activity!.toFixed(1)} (x ${(activity! / plain!).toFixed(2)}, ` +
      `${((activity! - plain!) / nets).toFixed(3)} ns a net); states of ${first} ${states!.toFixed(1)}`,
  );
}
