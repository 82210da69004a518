/** Thrown when a table cannot be used; the message begins with the place, `FILE:LINE:COL: `. */
export class TableError extends Error {
  readonly path: string;
  /** From 1. */
  readonly line: number;
  /** From 1, in characters. */
  readonly column: number;
  /** The message without the place. */
  readonly reason: string;

  constructor(path: string, line: number, column: number, reason: string) {
    super(`${path}:${line}:${column}: ${reason}`);
    this.name = 'TableError';
    this.path = path;
    this.line = line;
    this.column = column;
    this.reason = reason;
  }
}
