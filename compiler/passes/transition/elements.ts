import type { Circuit } from '../../circuit/circuit.js';

/** For each net driven by a register or latch, its index among these; -1 for other nets. */
export function elementsByNet(circuit: Circuit): Int32Array {
  const elementOf = new Int32Array(circuit.netCount).fill(-1);
  const { registers, latches } = circuit;
  for (let r = 0; r < registers.count; r++) elementOf[registers.output[r]!] = r;
  for (let l = 0; l < latches.count; l++) elementOf[latches.output[l]!] = l;
  return elementOf;
}
