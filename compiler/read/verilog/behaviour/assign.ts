import type { Position } from '../../../diagnostics/sourceMap.js';
import type { Expression } from '../syntax.js';
import { resize } from './bits.js';
import type { Context } from './context.js';
import { lowerAssigned } from './expressions.js';
import type { Bits } from './logic.js';
import type { WriteMode } from './store.js';
import { type Piece, targetPieces, targetWidth } from './targets.js';

/** Executes `target = value` or `target <= value` (clause 9.2). */
export function assignExpression(
  target: Expression,
  value: Expression,
  context: Context,
  mode: WriteMode,
): void {
  const pieces = targetPieces(target, 'variable', context);
  if (pieces === undefined) return;
  writePieces(pieces, lowerAssigned(value, context, targetWidth(pieces)), context, mode);
}

/** Writes bits to a target, cut or extended to its width. */
export function assignBits(
  target: Expression,
  bits: Bits,
  signed: boolean,
  context: Context,
  mode: WriteMode,
): void {
  const pieces = targetPieces(target, 'variable', context);
  if (pieces === undefined) return;
  const fitted = resize(bits, targetWidth(pieces), signed, context.logic);
  writePieces(pieces, fitted, context, mode);
}

/** The mode of a blocking assignment at a place. */
export function blockingAt(place: Position): WriteMode {
  return { blocking: true, place, isLoopIndex: false };
}

function writePieces(
  pieces: readonly Piece[],
  value: Bits,
  { store }: Context,
  mode: WriteMode,
): void {
  let start = 0;
  for (const { width, places } of pieces) {
    for (const { bits, when } of places) {
      bits.forEach((key, i) => {
        if (key !== undefined) store.write(key, value[start + i]!, when, mode);
      });
    }
    start += width;
  }
}
