import { existsSync, statSync } from 'node:fs';
import { resolve } from 'node:path';
import { STANDARD } from '../../../runtime/node/index.js';
import { UsageError } from '../usageError.js';
import type { ActivityOptions } from './activityOptions.js';
import type { ResponseOptions } from './responseOptions.js';
import type { StatesOptions } from './statesOptions.js';
import type { WaveOptions } from './waveOptions.js';

/**
 * Throws UsageError where two options write one file, and for `-` where standard output is not
 * written.
 */
export function refuseOutputs(
  options: ResponseOptions & WaveOptions & ActivityOptions & StatesOptions,
): void {
  const { response, waveform, table, picture, statesTable, statesGraph } = options;
  const files: readonly (readonly [option: string, path: string | undefined])[] = [
    ['--waveform', waveform],
    ['--table', table],
    ['--picture', picture],
    ['--activity', options.activity],
    ['--activity-picture', options.activityPicture],
    ['--states-table', statesTable],
    ['--states-graph', statesGraph],
  ];
  const writers = new Map<string, string>();
  if (response !== undefined && isFile(response)) writers.set(resolve(response), '--response');
  for (const [option, path] of files) {
    if (path === undefined) continue;
    if (path === STANDARD) {
      throw new UsageError(
        `error: ${option} - : it goes to a file, not to standard output; name one`,
      );
    }
    const other = writers.get(resolve(path));
    if (other !== undefined) {
      throw new UsageError(`error: ${other} and ${option} both write ${path}; name two files`);
    }
    if (isFile(path)) writers.set(resolve(path), option);
  }
}

// A device such as /dev/null takes what comes.
const isFile = (path: string): boolean =>
  path !== STANDARD && (!existsSync(path) || statSync(path).isFile());
