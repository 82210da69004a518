import { dirname } from 'node:path';
import { writeWhole } from '../report/writeWhole.js';
import { reason } from './netlists.js';
import { UsageError } from './usageError.js';

/** Writes a picture that appears all at once. Throws UsageError where it cannot be written. */
export function writePicture(path: string, picture: string): void {
  try {
    writeWhole(path, picture);
  } catch (error) {
    const isMissing = (error as NodeJS.ErrnoException).code === 'ENOENT';
    const why = isMissing ? `there is no folder ${dirname(path)}` : reason(error);
    throw new UsageError(`error: ${path} cannot be written: ${why}`);
  }
}
