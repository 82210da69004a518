// A recorded run that is to be killed: node victim.mjs NETLIST FOLDER CYCLES. Runs what was built.
import { readFileSync } from 'node:fs';
import {
  Diagnostics,
  designOf,
  FolderFiles,
  manifestOf,
  Recorder,
  RunRecord,
  readNetlist,
  recordedResponse,
  runDesign,
  Source,
  signResponse,
} from '../../dist/compiler/index.js';
import { randomStimulus } from '../../dist/runtime/index.js';

const [netlist, folder, cycles] = process.argv.slice(2);
const circuit = readNetlist([new Source(netlist, readFileSync(netlist))], {}, new Diagnostics());
const design = designOf(circuit);
const files = new FolderFiles(folder);
await files.make();
const origin = { version: '0.0.0', command: [], directory: '/', inputs: [] };
const record = await RunRecord.create(files, manifestOf(design, origin));
await runDesign(design, {
  stimulus: randomStimulus(design.layout, 77, Number(cycles)),
  engine: 'bytecode',
  powerUp: 'random',
  seed: 5,
  outlets: [signResponse(), recordedResponse(`${folder}.csv`, { every: 100, mark: 'victim' })],
  recorder: new Recorder(record, () => undefined, 10),
});
