import { type Diagnostic, headline } from '../diagnostics/diagnostics.js';
import type { Span } from '../diagnostics/source.js';

const MOST_SHOWN = 50;

/** Prints diagnostics on stderr, each with its source line and a caret; at most fifty. */
export function printDiagnostics(diagnostics: readonly Diagnostic[]): void {
  for (const diagnostic of diagnostics.slice(0, MOST_SHOWN)) {
    process.stderr.write(`${diagnosticText(diagnostic)}\n`);
  }
  const rest = diagnostics.length - MOST_SHOWN;
  if (rest > 0) process.stderr.write(`and ${rest} more\n`);
}

/** A diagnostic with its source line, a caret below the place, and related places. */
export function diagnosticText(diagnostic: Diagnostic): string {
  const { span, related } = diagnostic;
  const lines = [headline(diagnostic)];
  if (span !== undefined) lines.push(...excerpt(span));
  for (const { message, span: place } of related ?? []) {
    const { line, column } = place.source.place(place.start);
    lines.push(`  ${place.source.path}:${line}:${column}: ${message}`);
  }
  return lines.join('\n');
}

const WIDEST_EXCERPT = 120;

// A netlist line may be megabytes long: only the part around the place is shown.
function excerpt({ source, start }: Span): string[] {
  const { column } = source.place(start);
  const line = source.lineAt(start).replaceAll('\t', ' ');
  if (line.trim() === '') return [];
  const from = Math.max(0, column - 1 - WIDEST_EXCERPT / 2);
  const part = line.slice(from, from + WIDEST_EXCERPT);
  return [`    ${part}`, `    ${' '.repeat(column - 1 - from)}^`];
}
