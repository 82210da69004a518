import { figure } from '../figures.js';
import { binLabel, binned } from './bins.js';

const MOST_ROWS = 16;

/**
 * Counts by index as rows of text, one a bin and at most sixteen: a line as long as the count, with
 * a dot at its end. `width` is that of a row in characters, at least 40.
 */
export function textPlot(counts: readonly number[], first: number, width: number): string[] {
  const bins = binned(counts, first, MOST_ROWS);
  const most = bins.reduce((so, { count }) => Math.max(so, count), 1);
  const labels = bins.map(binLabel);
  const figures = bins.map(({ count }) => figure(count));
  const labelWidth = Math.max(...labels.map((label) => label.length));
  const longest = width - labelWidth - 2 - 2 - Math.max(...figures.map((text) => text.length));
  return bins.map(({ count }, row) => {
    const length = Math.round((count / most) * longest);
    const line = count === 0 ? '' : `${'─'.repeat(Math.max(length - 1, 0))}● `;
    return `${labels[row]!.padStart(labelWidth)}  ${line}${figures[row]}`;
  });
}
