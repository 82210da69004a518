import { type ModelLayout, type RowLayout, rowStride } from '../../runtime/layout.js';
import type { Contestant } from './benchEngines.js';
import type { BenchResult } from './benchResult.js';

/** Milliseconds for which each interpreter is compared; a fast one is through all rows before. */
const LIMIT_MS = 1000;

/** Thrown where two engines respond differently to the same stimulus. */
export class EngineDisagreement extends Error {
  constructor(message: string) {
    super(message);
    this.name = 'EngineDisagreement';
  }
}

/**
 * Compares the response of each engine with that of the first one; returns in how many cycles, at
 * most all rows. Throws `EngineDisagreement` at the first difference.
 */
export async function checkAgreement(
  layout: ModelLayout,
  [first, ...others]: readonly Contestant[],
  rows: number,
): Promise<BenchResult['agreement']> {
  const expected = await first!.respond(Number.POSITIVE_INFINITY);
  const stride = rowStride(layout.outputs, layout.threeValued);
  const checked: Partial<Record<string, number>> = {};
  for (const { name, respond } of others) {
    const actual = await respond(LIMIT_MS);
    const word = actual.findIndex((value, i) => value !== expected[i]);
    if (word >= 0) {
      const cycle = Math.floor(word / stride);
      const bit = differingBit(layout, word % stride, actual[word]! ^ expected[word]!);
      const message = `${first!.name} and ${name} disagree on ${bit} in cycle ${cycle}`;
      throw new EngineDisagreement(`${message}; no figure is worth anything, so none is given`);
    }
    checked[name] = stride === 0 ? rows : actual.length / stride;
  }
  return checked;
}

function differingBit({ outputs }: ModelLayout, word: number, difference: number): string {
  const bit = (word % outputs.words) * 32 + (31 - Math.clz32(difference & -difference));
  return bitName(outputs, bit);
}

function bitName({ ports }: RowLayout, bit: number): string {
  const port = ports.findLast(({ offset }) => offset <= bit)!;
  if (!port.isVector) return port.name;
  const place = bit - port.offset;
  return `${port.name}[${port.lsb <= port.msb ? port.lsb + place : port.lsb - place}]`;
}
