/** Thrown when a file of values cannot be used; the message begins with the file. */
export class FileError extends Error {
  readonly path: string;
  /** The message without the place. */
  readonly reason: string;

  constructor(path: string, reason: string, place = path) {
    super(`${place}: ${reason}`);
    this.name = 'FileError';
    this.path = path;
    this.reason = reason;
  }
}

/** Thrown where there is a place in the file; the message begins with it, `FILE:LINE:COL: `. */
export class TableError extends FileError {
  /** From 1. */
  readonly line: number;
  /** From 1, in characters. */
  readonly column: number;

  constructor(path: string, line: number, column: number, reason: string) {
    super(path, reason, `${path}:${line}:${column}`);
    this.name = 'TableError';
    this.line = line;
    this.column = column;
  }
}
