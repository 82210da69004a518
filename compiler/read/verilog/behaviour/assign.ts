import type { NetId } from '../../../circuit/ids.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { Expression } from '../syntax.js';
import { resize } from './bits.js';
import type { Context } from './context.js';
import { lowerAssigned } from './expressions.js';
import { foldConstant } from './foldConstant.js';
import { type HeldPlace, writeContents } from './heldMemory.js';
import type { Bits } from './logic.js';
import { meaningOf } from './names.js';
import { isPowerUp } from './powerUp.js';
import { isAccessible } from './selects.js';
import type { WriteMode } from './store.js';
import { type Piece, type Place, targetPieces, targetWidth } from './targets.js';
import { shapeOf } from './widths.js';

/** Executes `target = value` or `target <= value` (clause 9.2). */
export function assignExpression(
  target: Expression,
  value: Expression,
  context: Context,
  mode: WriteMode,
): void {
  if (assignKnown(target, value, context, mode)) return;
  const pieces = targetPieces(target, 'variable', context);
  if (pieces === undefined) return;
  writePieces(pieces, lowerAssigned(value, context, targetWidth(pieces)), context, mode);
}

/** Assigns a number to a variable, where both can be seen at once; that of a loop's index mostly. */
function assignKnown(
  target: Expression,
  value: Expression,
  context: Context,
  mode: WriteMode,
): boolean {
  if (target.kind !== 'name' || (context.access === 'all' && !mode.isLoopIndex)) return false;
  const binding = meaningOf(target, context);
  if (binding?.kind !== 'signal' || !binding.isVariable) return false;
  if (!isAccessible(binding, context)) return false;
  const { nets } = binding;
  const shape = shapeOf(value, context);
  const width = Math.max(nets.length, shape.width);
  const folded = foldConstant(value, context, width, shape.signed);
  if (folded === undefined) return false;
  return context.store.writeKnown(nets, BigInt.asUintN(nets.length, folded), mode);
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
  context: Context,
  mode: WriteMode,
): void {
  const { store, scope } = context;
  let start = 0;
  for (const { width, places } of pieces) {
    scope.shared.budget.spend((width >>> 3) * places.length);
    const word = places[0]?.word;
    if (word !== undefined)
      writeWord(word, places, value.slice(start, start + width), context, mode);
    else {
      for (const { bits, when } of places) {
        bits.forEach((key, i) => {
          if (key !== undefined) store.write(key, value[start + i]!, when, mode);
        });
      }
    }
    start += width;
  }
}

// The places of one word exclude each other, so that they are one write.
function writeWord(
  { held, width, address, beyond }: HeldPlace,
  places: readonly Place[],
  value: Bits,
  context: Context,
  mode: WriteMode,
): void {
  const { logic, store } = context;
  const mask = new Array<NetId>(width).fill(logic.zero);
  const data = new Array<NetId>(width).fill(logic.zero);
  for (const { bits, when } of places) {
    bits.forEach((bit, i) => {
      if (bit === undefined) return;
      const isFirst = mask[bit] === logic.zero;
      data[bit] = isFirst ? value[i]! : logic.mux(when, data[bit]!, value[i]!);
      mask[bit] = logic.or(mask[bit]!, when);
    });
  }
  // What the mask of a single place says is said by the condition already.
  const only = places.length === 1 ? places[0]!.when : undefined;
  const write = {
    memory: held,
    when: only ?? logic.not(beyond),
    address,
    data,
    mask: only === undefined ? mask : mask.map((net) => (net === logic.zero ? net : logic.one)),
    place: mode.place,
  };
  if (isPowerUp(context) && store.isUnconditional && mode.blocking) {
    writeContents([write], logic);
  } else store.writeWord(write, mode.blocking);
}
