import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';

const root = new URL('../..', import.meta.url).pathname;

/** One import or re-export. */
export interface Import {
  /** The file that imports, from the project root: `compiler/emit/emitModel.ts`. */
  readonly from: string;
  /** The file imported, in the same form; or `node:fs`, or the name of a package. */
  readonly to: string;
  /** Gone from the built module: `import type`, `export type … from`. */
  readonly isType: boolean;
}

/** The text of a file of the project, by its path from the root. */
export const textOf = (path: string): string => readFileSync(join(root, path), 'utf8');

/** The TypeScript files below a folder, in order of their paths from the root. */
export const filesBelow = (folder: string): string[] =>
  readdirSync(join(root, folder), { recursive: true, encoding: 'utf8' })
    .filter((file) => file.endsWith('.ts'))
    .map((file) => join(folder, file))
    .sort();

const STATEMENT =
  /^(?:import|export)\s+(type\s+)?(?:\w+\s*,?\s*)?(?:\*(?:\s+as\s+\w+)?|\{[^}]*\})?\s*from\s+'([^']+)';$/gm;
const BARE = /^import\s+'([^']+)';$/gm;
const DYNAMIC = /\bimport\(\s*'([^']+)'\s*\)/g;

/**
 * The imports of a file, as the formatter leaves them. Throws an Error where a line looks like
 * one but is not understood.
 */
export function importsOf(from: string): Import[] {
  const text = textOf(from);
  const statements = Array.from(text.matchAll(STATEMENT), ([, type, to]) => ({
    from,
    to: target(from, to!),
    isType: type !== undefined,
  }));
  const ends = text.match(/\bfrom '[^']+';$/gm)?.length ?? 0;
  if (ends !== statements.length) {
    throw new Error(`${from} has ${ends} imports, of which ${statements.length} are understood`);
  }
  const others = [BARE, DYNAMIC].flatMap((form) =>
    Array.from(text.matchAll(form), ([, to]) => to!),
  );
  return [...statements, ...others.map((to) => ({ from, to: target(from, to), isType: false }))];
}

const target = (from: string, to: string): string =>
  to.startsWith('.') ? join(dirname(from), to).replace(/\.js$/, '.ts') : to;

/** Circles among the edges of a graph, written `a -> b -> a`; none only where there is none. */
export function circles(
  edges: readonly { readonly from: string; readonly to: string }[],
): string[] {
  const next = new Map<string, Set<string>>();
  for (const { from, to } of edges) next.set(from, (next.get(from) ?? new Set()).add(to));
  const found: string[] = [];
  const finished = new Set<string>();
  const visit = (node: string, path: readonly string[]): void => {
    const start = path.indexOf(node);
    if (start >= 0) found.push([...path.slice(start), node].join(' -> '));
    if (start >= 0 || finished.has(node)) return;
    for (const to of next.get(node) ?? []) visit(to, [...path, node]);
    finished.add(node);
  };
  for (const node of next.keys()) visit(node, []);
  return found;
}
