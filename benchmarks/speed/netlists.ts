import { existsSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { circuits } from '../circuits/index.js';

const published = fileURLToPath(new URL('../../../shared/circuits/', import.meta.url));

const ownNames = ['lock', 'uart', 'counter', 'sha256', 'aes128'];
const publishedNames = ['s27', 's298', 's1488', 's5378', 's13207.1', 's35932'];

/**
 * The netlists that are measured: our own, written to a folder, and the published ones, where their
 * folder stands beside the project.
 */
export function netlists(folder: string): string[] {
  const own = ownNames.map((name) => {
    const file = join(folder, `${name}.v`);
    const circuit = circuits.find((each) => each.name === name)!;
    writeFileSync(file, [...circuit.write()].join(''));
    return file;
  });
  const files = publishedNames.map((name) => join(published, `${name}.bench`));
  return [...files.filter((file) => existsSync(file)), ...own];
}
