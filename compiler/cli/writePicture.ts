import { STANDARD } from '../../runtime/node/index.js';
import { writeWhole } from '../report/writeWhole.js';
import { reason } from './netlists.js';
import { UsageError } from './usageError.js';

/** Writes a picture that appears all at once. Throws UsageError where it cannot be written. */
export function writePicture(path: string, picture: string): void {
  if (path === STANDARD)
    throw new UsageError('error: a picture goes to a file, not to -; name one');
  try {
    writeWhole(path, picture);
  } catch (error) {
    throw new UsageError(`error: ${path} cannot be written: ${reason(error)}`);
  }
}
