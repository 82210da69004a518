/*
 * A reader of backward SAIF files for tests: lists of words and texts in parentheses, taken as IEEE
 * 1801 describes the format (from memory of the standard), with nothing of the project's own in it.
 */

/** A word, or a list in parentheses. */
type Item = string | readonly Item[];

/** A file as a whole. */
export interface Saif {
  /** Statements of the header by keyword. */
  readonly header: ReadonlyMap<string, string>;
  /** Durations and counts of each net (`T0`, `T1`, `TX`, `TC`, …) by its path with dots. */
  readonly nets: ReadonlyMap<string, Readonly<Record<string, number>>>;
}

/** Reads a file. Throws an Error where it departs from the format. */
export function readSaif(text: string): Saif {
  const [file, ...rest] = itemsOf(text);
  if (!Array.isArray(file) || rest.length > 0 || file[0] !== 'SAIFILE') throw new Error('SAIFILE');
  const header = new Map<string, string>();
  const nets = new Map<string, Record<string, number>>();
  for (const item of file.slice(1)) {
    const [keyword, ...values] = listOf(item);
    if (keyword === 'INSTANCE') addInstance(item, [], nets);
    else header.set(wordOf(keyword!), values.map(wordOf).join(' '));
  }
  return { header, nets };
}

function addInstance(
  item: Item,
  path: readonly string[],
  nets: Map<string, Record<string, number>>,
) {
  const [, name, ...parts] = listOf(item);
  const inside = [...path, wordOf(name!)];
  for (const part of parts) {
    const [keyword, ...members] = listOf(part);
    if (keyword === 'INSTANCE') addInstance(part, inside, nets);
    else if (keyword === 'NET') {
      for (const member of members) {
        const [net, ...counts] = listOf(member);
        const full = [...inside, wordOf(net!)].join('.');
        if (nets.has(full)) throw new Error(`twice: ${full}`);
        nets.set(full, Object.fromEntries(counts.map(countOf)));
      }
    } else throw new Error(`in an instance: ${keyword}`);
  }
}

function countOf(item: Item): [string, number] {
  const [kind, value, ...more] = listOf(item).map(wordOf);
  if (!['T0', 'T1', 'TX', 'TZ', 'TB', 'TC', 'TG', 'IG', 'IK'].includes(kind!) || more.length > 0) {
    throw new Error(`count ${kind}`);
  }
  if (!/^\d+$/.test(value!)) throw new Error(`${kind} ${value}`);
  return [kind!, Number(value)];
}

function itemsOf(text: string): Item[] {
  const open: Item[][] = [[]];
  // A backslash takes its meaning from the character behind it.
  for (const [token] of text.matchAll(/[()]|"(?:\\.|[^"\\])*"|(?:\\.|[^\s()"\\])+|\S/gs)) {
    if (token === '(') open.push([]);
    else if (token === ')') {
      const done = open.pop();
      if (done === undefined || open.length === 0) throw new Error('one ) too many');
      open.at(-1)!.push(done);
    } else open.at(-1)!.push(token.replace(/^"|"$/g, '').replace(/\\(.)/gs, '$1'));
  }
  if (open.length !== 1) throw new Error('a ) is missing');
  return open[0]!;
}

function listOf(item: Item): readonly Item[] {
  if (typeof item === 'string') throw new Error(`no list: ${item}`);
  return item;
}

function wordOf(item: Item): string {
  if (typeof item !== 'string') throw new Error('a list in place of a word');
  return item;
}
