import type { DiagnosticCode } from '../../../diagnostics/codes.js';
import { type Diagnostic, Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Source, Span } from '../../../diagnostics/source.js';

/**
 * Says each thing once: a module that is elaborated for several sets of parameter values would
 * otherwise repeat what is wrong with its text.
 */
export class DistinctDiagnostics extends Diagnostics {
  readonly #said = new Set<string>();
  readonly #sources = new Map<Source, number>();

  override add(
    code: DiagnosticCode,
    message: string,
    span?: Span,
    related?: Diagnostic['related'],
  ): void {
    const key = `${code} ${span === undefined ? '' : this.#place(span)} ${message}`;
    if (this.#said.has(key)) return;
    this.#said.add(key);
    super.add(code, message, span, related);
  }

  #place({ source, start }: Span): string {
    const known = this.#sources.get(source) ?? this.#sources.size;
    this.#sources.set(source, known);
    return `${known}:${start}`;
  }
}

/** Keeps the first of many reports alike, and counts the rest. */
export class LimitedReport {
  readonly #code: DiagnosticCode;
  readonly #limit: number;
  readonly #kept: Pick<Diagnostic, 'message' | 'span'>[] = [];
  #more = 0;

  constructor(code: DiagnosticCode, limit: number) {
    this.#code = code;
    this.#limit = limit;
  }

  add(message: string, span: Span): void {
    if (this.#kept.length < this.#limit) this.#kept.push({ message, span });
    else this.#more++;
  }

  /** Reports what was kept; `closing` writes a last message about the number left out. */
  report(diagnostics: Diagnostics, closing: (more: number) => string): void {
    for (const { message, span } of this.#kept) diagnostics.add(this.#code, message, span);
    if (this.#more > 0) diagnostics.add(this.#code, closing(this.#more));
  }
}

/** A span from an offset to the end of the word or the one character that stands there. */
export function wordSpan(source: Source, start: number): Span {
  const { bytes } = source;
  let end = start;
  while (end < bytes.length && isNameByte(bytes[end]!)) end++;
  return { source, start, end: Math.max(end, Math.min(start + 1, bytes.length)) };
}

// Letters, digits, $ and _, any byte of a character beyond ASCII, and the \ of an escaped name.
const isNameByte = (byte: number): boolean =>
  (byte >= 48 && byte <= 57) ||
  (byte >= 65 && byte <= 90) ||
  (byte >= 97 && byte <= 122) ||
  byte === 36 ||
  byte === 95 ||
  byte === 92 ||
  byte > 127;
