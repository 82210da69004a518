import { figure } from '../../report/figures.js';

/** Words of a table, and how many bits they tell of. */
export interface Cell {
  readonly text: string;
  readonly bits: number;
}

/** A row of a table: what it is about, and what it says, a comma between two cells. */
export interface Row {
  readonly label: string;
  readonly cells: readonly Cell[];
}

interface Line {
  readonly text: string;
  readonly bits: number;
}

const INDENT = '  ';
const GAP = '   ';
const WIDEST_LABELS = 36;

/**
 * Rows as lines of at most `width` characters, as far as single cells and labels fit; labels of
 * up to 36 characters make a column. Of more than `most` lines the last says how many bits are
 * left out.
 */
export function tableLines(rows: readonly Row[], width: number, most: number): string[] {
  // Every row takes a line at least.
  const shown = rows.slice(0, most);
  const labelWidth = Math.min(
    WIDEST_LABELS,
    Math.max(0, ...shown.map(({ label }) => label.length)),
  );
  const lines = shown.flatMap((row) => wrapped(row, labelWidth, width));
  if (lines.length <= most && shown.length === rows.length) return lines.map(({ text }) => text);
  const kept = lines.slice(0, most - 1);
  const rest = bitsOf(rows.flatMap(({ cells }) => cells)) - bitsOf(kept);
  return [...kept.map(({ text }) => text), `${INDENT}and ${figure(rest)} more`];
}

const bitsOf = (parts: readonly { readonly bits: number }[]): number =>
  parts.reduce((sum, { bits }) => sum + bits, 0);

function wrapped({ label, cells }: Row, labelWidth: number, width: number): Line[] {
  const lines: Line[] = [];
  let text = `${INDENT}${label.padEnd(labelWidth)}`;
  let words = 0;
  let bits = 0;
  cells.forEach((cell, i) => {
    const word = i + 1 < cells.length ? `${cell.text},` : cell.text;
    if (words > 0 && text.length + 1 + word.length > width) {
      lines.push({ text, bits });
      text = `${INDENT}${' '.repeat(labelWidth)}`;
      words = 0;
      bits = 0;
    }
    const gap = words > 0 ? ' ' : labelWidth > 0 ? GAP : '';
    text += gap + word;
    words++;
    bits += cell.bits;
  });
  return [...lines, { text, bits }];
}
