import { WholeFile } from '../../runtime/node/wholeFile.js';

/**
 * Writes a text to a file that appears all at once, or not at all, as `WholeFile` does.
 *
 * Throws what the file system throws.
 */
export function writeWhole(path: string, text: string): void {
  const file = new WholeFile(path);
  try {
    file.put(Buffer.from(text));
    file.finish();
  } catch (error) {
    file.discard();
    throw error;
  }
}
