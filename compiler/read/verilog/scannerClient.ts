import type { Position } from '../../diagnostics/sourceMap.js';

/** Who gives the scanner its texts and hears of problems. */
export interface ScannerClient {
  /** Called at a backtick: reads a directive or macro use, and moves the scanner past it. */
  directive(): void;
  /** Called at the end of a text: goes on in the text around it, or returns false. */
  endOfText(): boolean;
  /** Reports text that is no token. */
  problem(message: string, start: Position, end: Position): void;
}
