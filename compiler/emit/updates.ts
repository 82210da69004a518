import type binaryen from 'binaryen';
import type { Emission, Pointers } from './blockEmitter.js';
import { ALWAYS } from './sinks.js';

/**
 * Emits the updates of a program, sixteen state bytes each: the data that has been stored in the
 * next area (or stands in the current one) is joined with the old bytes by the enable,
 * `old ^ (enable & (data ^ old))`, and cleared by the gate. Only bit 0 of a byte counts.
 *
 * Stands behind all operations, so that the narrow stores of the data have left the store buffer.
 */
export function emitUpdates(
  { module, i32, program, area }: Emission,
  { current, next }: Pointers,
): binaryen.ExpressionRef[] {
  const { v128, local } = module;
  const at = (pointer: number) => local.get(pointer, i32);
  return program.updates.map(({ first, enable, gate, from }, update) => {
    const condition = (which: number) =>
      v128.load8_splat(area.conditions + 2 * update + which, 1, at(next), '0');
    const old = () => v128.load(first, 1, at(current), '0');
    const data =
      from < 0 ? v128.load(first, 1, at(next), '0') : v128.load(from, 1, at(current), '0');
    const held =
      enable === ALWAYS ? data : v128.xor(old(), v128.and(condition(0), v128.xor(data, old())));
    const gated = gate === ALWAYS ? held : v128.and(held, condition(1));
    return v128.store(first, 1, at(next), gated, '0');
  });
}
