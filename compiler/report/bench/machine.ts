import { cpus, loadavg } from 'node:os';
import type { Machine } from './suite.js';

/** The machine that this runs on, as it is now. */
export function thisMachine(): Machine {
  const processors = cpus();
  return {
    processor: processors[0]?.model.trim() ?? 'unknown',
    cores: processors.length,
    node: process.version,
    load: Number(loadavg()[0]!.toFixed(2)),
  };
}
