import type { NetId } from '../../../circuit/ids.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { Expression } from '../syntax.js';
import type { Context } from './context.js';
import { lowerAssigned } from './expressions.js';
import { lowerFloating, mayFloat } from './floating.js';
import { type FloatingBits, operandOf, resizeFloating } from './floatingBits.js';
import { foldConstant } from './foldConstant.js';
import { type HeldPlace, writeContents } from './heldMemory.js';
import type { Bits } from './logic.js';
import { meaningOf } from './names.js';
import { isPowerUp } from './powerUp.js';
import { isAccessible } from './selects.js';
import type { WriteMode } from './store.js';
import { type Piece, type Place, targetPieces, targetWidth } from './targets.js';
import { isBare } from './walk.js';
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
  const width = targetWidth(pieces);
  if (context.access === 'all' && mayFloat(value, context)) {
    writeFloating(pieces, lowerFloating(value, context, width), context, mode);
  } else {
    const isCopy = context.access === 'all' && isBare(value) ? true : undefined;
    writePieces(pieces, lowerAssigned(value, context, width), context, { ...mode, isCopy });
  }
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
  bits: FloatingBits,
  signed: boolean,
  context: Context,
  mode: WriteMode,
): void {
  const pieces = targetPieces(target, 'variable', context);
  if (pieces === undefined) return;
  const fitted = resizeFloating(bits, targetWidth(pieces), signed, context.logic);
  writeFloating(pieces, fitted, context, mode);
}

/** The mode of a blocking assignment at a place. */
export function blockingAt(place: Position): WriteMode {
  return { blocking: true, place, isLoopIndex: false };
}

function writeFloating(
  pieces: readonly Piece[],
  bits: FloatingBits,
  context: Context,
  mode: WriteMode,
): void {
  const driven = bits.map(({ enable }) => enable);
  const value = bits.map(({ data }) => data);
  writePieces(pieces, value, context, mode, driven);
}

/** `driven`, if given, is 0 for the bits of the value that are z. */
function writePieces(
  pieces: readonly Piece[],
  value: Bits,
  context: Context,
  mode: WriteMode,
  driven?: Bits,
): void {
  const { store, scope, logic } = context;
  // No memory holds z.
  const asOperand = (data: NetId, i: number) => operandOf({ data, enable: driven![i]! }, logic);
  let start = 0;
  for (const { width, places } of pieces) {
    scope.shared.budget.spend((width >>> 3) * places.length);
    const word = places[0]?.word;
    if (word !== undefined) {
      const bits = value.slice(start, start + width);
      const held = driven === undefined ? bits : bits.map((data, i) => asOperand(data, start + i));
      writeWord(word, places, held, context, mode);
    } else {
      for (const { bits, when } of places) {
        bits.forEach((key, i) => {
          if (key !== undefined)
            store.write(key, value[start + i]!, when, mode, driven?.[start + i]);
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
