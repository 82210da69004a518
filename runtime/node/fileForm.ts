import { FileError } from './tableError.js';

/** The forms in which values are read and written, by the ending of the file. */
export const valueForms = ['csv', 'packed', 'vcd', 'module'] as const;

/** One of `valueForms`. */
export type ValueForm = (typeof valueForms)[number];

/** The name that stands for standard input or standard output. */
export const STANDARD = '-';

const ENDINGS: readonly (readonly [string, ValueForm])[] = [
  ['.rows', 'packed'],
  ['.vcd', 'vcd'],
  ['.mjs', 'module'],
  ['.js', 'module'],
];

/** Whether a file is compressed (RFC 1952), which its ending `.gz` tells. */
export const isCompressed = (path: string): boolean => /\.gz$/i.test(path);

/**
 * The form of a file: `.rows` packed rows, `.vcd` a value change dump, `.mjs` and `.js` a module;
 * all else is comma-separated values. A further ending `.gz` is passed over.
 */
export function formOf(path: string): ValueForm {
  const name = path.replace(/\.gz$/i, '').toLowerCase();
  return ENDINGS.find(([ending]) => name.endsWith(ending))?.[1] ?? 'csv';
}

/** How a file is called in messages. */
export const shownName = (path: string): string => (path === STANDARD ? 'standard input' : path);

/** An error that has no place in the file. */
export const wholeFileError = (path: string, reason: string): FileError =>
  new FileError(shownName(path), reason);
