import { Source } from '../../diagnostics/source.js';

/**
 * Finds included files: beside the including file first, then in `directories` in order.
 *
 * `readFile` returns the bytes of a file, or undefined if there is none. A file that is included
 * twice is read once.
 */
export function includeReader(
  directories: readonly string[],
  readFile: (path: string) => Uint8Array | undefined,
): (path: string, from: Source) => Source | undefined {
  const known = new Map<string, Source>();
  const read = (path: string): Source | undefined => {
    let source = known.get(path);
    if (source === undefined) {
      const bytes = readFile(path);
      if (bytes === undefined) return undefined;
      source = new Source(path, bytes);
      known.set(path, source);
    }
    return source;
  };
  return (path, from) => {
    if (path.startsWith('/')) return read(path);
    const beside = from.path.slice(0, from.path.lastIndexOf('/') + 1);
    for (const folder of [beside, ...directories.map((directory) => `${directory}/`)]) {
      const source = read(folder + path);
      if (source !== undefined) return source;
    }
    return undefined;
  };
}
