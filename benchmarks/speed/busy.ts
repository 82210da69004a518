import type { Machine } from '../../compiler/report/bench/suite.js';

/** Processes that want a core, on average, beyond which times are not worth recording. */
const MOST_LOAD = 3;

/** Whether a machine had too much else to do for its times to be recorded; then says so and fails. */
export function isBusy({ load }: Machine): boolean {
  if (load <= MOST_LOAD) return false;
  process.stderr.write(`not written: the load was ${load}, above ${MOST_LOAD}\n`);
  process.exitCode = 1;
  return true;
}
