/** A group of a Liberty file, or a line that stands as it is. */
export type LibertyItem = string | LibertyGroup;

/** `kind (names) { … }`. */
export interface LibertyGroup {
  readonly kind: string;
  readonly names: string;
  readonly items: readonly LibertyItem[];
}

/** A group. */
export const group = (kind: string, names: string, ...items: LibertyItem[]): LibertyGroup => ({
  kind,
  names,
  items,
});

/** An attribute whose value is a string. */
export const quoted = (name: string, value: string): string => `${name} : "${value}";`;

/** An attribute whose value is a word or a number. */
export const plain = (name: string, value: string | number): string => `${name} : ${value};`;

/** The lines of a group, indented; long lists in strings go over several lines by `\`. */
export function* libertyLines(given: LibertyItem, depth = 0): Generator<string> {
  const indent = '  '.repeat(depth);
  if (typeof given === 'string') {
    yield indent + given.replaceAll('\n', `\n${indent}  `);
    return;
  }
  yield `${indent}${given.kind} (${given.names}) {`;
  for (const item of given.items) yield* libertyLines(item, depth + 1);
  yield `${indent}}`;
}
