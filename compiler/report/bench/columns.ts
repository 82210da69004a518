/** A figure with the digits that fit its size. */
export const shown = (value: number): string =>
  value.toFixed(value < 10 ? 2 : value < 1000 ? 1 : 0);

/** A rate with three digits and its prefix. */
export function rate(perSecond: number): string {
  if (perSecond >= 1e6) return `${(perSecond / 1e6).toPrecision(3)} M`;
  if (perSecond >= 1e3) return `${(perSecond / 1e3).toPrecision(3)} k`;
  return `${perSecond.toPrecision(3)}  `;
}

/** Rows as lines of text: names stand left in their column, figures right. */
export function aligned(rows: readonly (readonly string[])[]): string[] {
  const widths = rows[0]!.map((_, column) => Math.max(...rows.map((row) => row[column]!.length)));
  return rows.map(([name, ...figures]) =>
    [name!.padEnd(widths[0]!), ...figures.map((cell, i) => cell.padStart(widths[i + 1]!))].join(
      '   ',
    ),
  );
}
