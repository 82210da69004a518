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

/**
 * Rows as lines of at most `width` characters, labels in a column of their own; cells are never
 * broken. Of more than `most` lines the last says how many bits are left out.
 */
export function tableLines(rows: readonly Row[], width: number, most: number): string[] {
  const labelWidth = Math.max(0, ...rows.map(({ label }) => label.length));
  const lines = rows.flatMap((row) => wrapped(row, labelWidth, width));
  if (lines.length <= most) return lines.map(({ text }) => text);
  const shown = lines.slice(0, most - 1);
  const rest = lines.slice(most - 1).reduce((sum, { bits }) => sum + bits, 0);
  return [...shown.map(({ text }) => text), `${INDENT}and ${rest.toLocaleString('en-US')} more`];
}

function wrapped({ label, cells }: Row, labelWidth: number, width: number): Line[] {
  const lines: Line[] = [];
  const blank = `${INDENT}${' '.repeat(labelWidth)}`;
  let text = `${INDENT}${label.padEnd(labelWidth)}`;
  let bits = 0;
  cells.forEach((cell, i) => {
    const word = i + 1 < cells.length ? `${cell.text},` : cell.text;
    if (bits > 0 && text.length + 1 + word.length > width) {
      lines.push({ text, bits });
      text = blank;
      bits = 0;
    }
    text += bits === 0 ? `   ${word}` : ` ${word}`;
    bits += cell.bits;
  });
  return [...lines, { text, bits }];
}
