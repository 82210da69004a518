import { codeTable, type DiagnosticCode, type Severity } from './codes.js';
import type { Span } from './source.js';

/** Something to tell the user about an input, with its place where there is one. */
export interface Diagnostic {
  readonly code: DiagnosticCode;
  readonly severity: Severity;
  /** One sentence that says what is wrong and, where there is one, the way out. */
  readonly message: string;
  readonly span?: Span;
  /** Further places that belong to it: the first declaration, the other driver. */
  readonly related?: readonly { readonly message: string; readonly span: Span }[];
}

/** Collects what readers and passes have to say, so that one run reports many problems. */
export class Diagnostics {
  readonly list: Diagnostic[] = [];
  #errors = 0;

  /** Adds a diagnostic; its severity is that of the code's table row. */
  add(
    code: DiagnosticCode,
    message: string,
    span?: Span,
    related?: readonly { readonly message: string; readonly span: Span }[],
  ): void {
    const { severity } = codeTable[code];
    if (severity === 'error') this.#errors++;
    this.list.push({
      code,
      severity,
      message,
      ...(span && { span }),
      ...(related && { related }),
    });
  }

  /** Whether any diagnostic so far is an error. */
  get hasErrors(): boolean {
    return this.#errors > 0;
  }

  /** Throws an `InputError` with everything collected, if there is an error among it. */
  throwIfErrors(): void {
    if (this.hasErrors) throw new InputError(this.list);
  }
}

/** Thrown when an input cannot be used; holds all diagnostics in the order they were found. */
export class InputError extends Error {
  readonly diagnostics: readonly Diagnostic[];

  constructor(diagnostics: readonly Diagnostic[]) {
    super(diagnostics.map(headline).join('\n'));
    this.name = 'InputError';
    this.diagnostics = diagnostics;
  }
}

/** `FILE:LINE:COL: severity: message [code]`, without the place where there is none. */
export function headline(diagnostic: Diagnostic): string {
  const { span, severity, message, code } = diagnostic;
  const text = `${severity}: ${message} [${code}]`;
  if (span === undefined) return text;
  const { line, column } = span.source.place(span.start);
  return `${span.source.path}:${line}:${column}: ${text}`;
}
