import { accessSync, constants, statSync } from 'node:fs';
import { delimiter, join } from 'node:path';

/** Names under which a C compiler is looked for on PATH, in this order. */
const USUAL_NAMES = ['cc', 'gcc', 'clang'];

/** A command that compiles C, or the reason why there is none. */
export type FoundCompiler = { readonly command: readonly string[] } | { readonly missing: string };

/**
 * Finds a C compiler: what the variable CC names (with options after it, if any), and without CC
 * the first of `cc`, `gcc` and `clang` on PATH. A CC that cannot be run is not passed over.
 */
export function findCompiler(environment: NodeJS.ProcessEnv = process.env): FoundCompiler {
  const path = environment.PATH ?? '';
  const wanted = (environment.CC ?? '').split(/\s+/).filter((word) => word !== '');
  if (wanted.length > 0) {
    const program = located(wanted[0]!, path);
    return program === undefined
      ? { missing: `CC names ${wanted[0]}, which is no program that can be run` }
      : { command: [program, ...wanted.slice(1)] };
  }
  for (const name of USUAL_NAMES) {
    const program = located(name, path);
    if (program !== undefined) return { command: [program] };
  }
  return { missing: 'no C compiler was found: none of cc, gcc, clang is on PATH; CC can name one' };
}

function located(name: string, path: string): string | undefined {
  if (name.includes('/')) return isProgram(name) ? name : undefined;
  const places = path.split(delimiter).filter((directory) => directory !== '');
  return places.map((directory) => join(directory, name)).find(isProgram);
}

function isProgram(file: string): boolean {
  try {
    accessSync(file, constants.X_OK);
    return statSync(file).isFile();
  } catch {
    return false;
  }
}
