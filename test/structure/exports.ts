import { join } from 'node:path';
import { textOf } from './sources.js';

/** A name that a face hands on, and the file that defines it. */
export interface Exported {
  readonly name: string;
  readonly file: string;
}

const LIST = /^export (?:type )?\{([^}]*)\} from '\.\/([^']+)\.js';$/gm;

/**
 * The names that a face exports, a file of nothing but `export { … } from` its own folder. Throws
 * an Error for any other export.
 */
export function exportsOf(face: string): Exported[] {
  const text = textOf(face);
  const lists = Array.from(text.matchAll(LIST));
  const count = text.match(/^export\b/gm)?.length ?? 0;
  if (count !== lists.length) {
    throw new Error(`${face} has ${count} exports, of which ${lists.length} are lists of names`);
  }
  return lists.flatMap(([, names, path]) => {
    const file = join(face, '..', `${path}.ts`);
    return Array.from(names!.matchAll(/(\w+)\s*(?:,|$)/g), ([, name]) => ({ name: name!, file }));
  });
}

/** Whether a doc comment ends on the line above each definition of the name, of which one exists. */
export function isDocumented({ name, file }: Exported): boolean {
  const lines = textOf(file).split('\n');
  const definition = new RegExp(
    `^export (?:abstract |async )*(?:function\\*? ?|class |const |interface |type )${name}\\b`,
  );
  const places = lines.flatMap((line, i) => (definition.test(line) ? [i] : []));
  return places.length > 0 && places.every((at) => endsDocComment(lines, at - 1));
}

function endsDocComment(lines: readonly string[], last: number): boolean {
  if (!lines[last]?.endsWith('*/')) return false;
  let first = last;
  while (first > 0 && !lines[first]!.startsWith('/*')) first--;
  return lines[first]!.startsWith('/**');
}
