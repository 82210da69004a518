import { PinLists } from '../../../circuit/analyses/pinLists.js';
import type { Circuit } from '../../../circuit/circuit.js';
import { GateKind } from '../../../circuit/gates.js';
import { loopsOf } from '../../../circuit/loops.js';
import { type LoopSummary, loopSummaries } from '../loopSummary.js';
import type { NetWords } from '../netWords.js';
import type { ProblemContext } from './context.js';

const SHOWN = 10;

/** Combinational loops; those of a latch through itself apart, since they tell of a mistake. */
export function findLoops({ design: { circuit }, words, diagnostics }: ProblemContext): void {
  const found = loopSummaries(circuit, SHOWN);
  const latchAt = new PinLists(circuit.netCount, circuit.latches.output);
  for (const loop of found) {
    const span = words.span(loop.path[0]!);
    const latch = loneLatch(circuit, latchAt, loop);
    if (latch === undefined) diagnostics.add('combinational-loop', loopText(loop, words), span);
    else diagnostics.add('latch-feedback', latchText(loop, latch, words), words.span(latch));
  }
  const more = loopsOf(circuit).nets.length - found.length;
  if (more > 0) diagnostics.add('combinational-loop', `${more} more loops of this kind`);
}

function loopText({ size, path }: LoopSummary, words: NetWords): string {
  const what = size === 1 ? 'a net feeds back to itself' : `${size} nets feed back to themselves`;
  return `${what} without a register: ${wayRound(path, words)}`;
}

function latchText(loop: LoopSummary, latch: number, words: NetWords): string {
  return (
    `latch ${words.name(latch)} passes its own value back to its data while it is open; a ` +
    `register is more likely meant: ${wayRound(loop.path, words)}`
  );
}

function wayRound(path: readonly number[], words: NetWords): string {
  const back = path.length > 1 ? `, back to ${words.name(path[0]!)}` : '';
  return words.list(path, 8) + back;
}

/**
 * A latch on the way round, where all latches there are open at the same time. Latches of two
 * phases, one after the other, are how a register can be made of them.
 */
function loneLatch(circuit: Circuit, latchAt: PinLists, { path }: LoopSummary): number | undefined {
  const onPath = path.filter((net) => circuit.kind[net] === GateKind.Latch);
  const enables = onPath.map((net) => circuit.latches.enable[latchAt.first(net)]);
  return new Set(enables).size === 1 ? onPath[0] : undefined;
}
