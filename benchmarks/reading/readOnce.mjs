// Reads netlist files into a circuit with the built library, once, and prints what that took as
// JSON: `node readOnce.mjs FILE...`

import { readFileSync } from 'node:fs';
import { Diagnostics } from '../../dist/compiler/diagnostics/diagnostics.js';
import { Source } from '../../dist/compiler/diagnostics/source.js';
import { readNetlist } from '../../dist/compiler/read/readNetlist.js';
import { includeReader } from '../../dist/compiler/read/verilog/includes.js';

const before = process.cpuUsage();
const start = performance.now();
const sources = process.argv.slice(2).map((file) => new Source(file, readFileSync(file)));
const diagnostics = new Diagnostics();
const circuit = readNetlist(sources, { readInclude: includeReader([], readFileSync) }, diagnostics);
const seconds = (performance.now() - start) / 1000;
const { user, system } = process.cpuUsage(before);
diagnostics.throwIfErrors();
const result = {
  seconds,
  processorSeconds: (user + system) / 1e6,
  nets: circuit.netCount,
  registers: circuit.registers.count,
};
process.stdout.write(JSON.stringify(result));
