import { readCounts } from '../../../circuit/analyses/readCounts.js';
import { unusedParts } from '../../../circuit/analyses/unused.js';
import { counted } from '../../figures.js';
import { memorySpan } from '../memorySummary.js';
import { listText } from '../netWords.js';
import type { ProblemContext } from './context.js';

/** Gates, and state elements, that make no difference to any output. */
export function findUnused({ design: { circuit }, words, diagnostics }: ProblemContext): void {
  const { gates, state, memories } = unusedParts(circuit);
  // Gates that no text names are left over where one was made of several.
  if (gates.some((net) => words.hasName(net))) {
    const reads = readCounts(circuit);
    const ends = gates.filter((net) => reads[net] === 0);
    const shown = ends.length > 0 ? ends : gates;
    const message =
      `${counted(gates.length, 'gate')} lead${gates.length === 1 ? 's' : ''} to no output, ` +
      `register or latch${ends.length > 0 ? '; nothing reads' : ':'} ${words.list(shown)}`;
    diagnostics.add('logic-unused', message, words.span(shown[0]!));
  }
  if (state.length > 0 && circuit.outputs.length > 0) {
    const message =
      `no output depends on ${counted(state.length, 'register or latch', 'registers and latches')}` +
      `, not even through others: ${words.list(state)}`;
    diagnostics.add('state-unused', message, words.span(state[0]!));
  }
  if (memories.length > 0 && circuit.outputs.length > 0) {
    const names = memories.slice(0, 4).map((number) => circuit.memories[number]!.name);
    const message =
      `no output depends on ${counted(memories.length, 'memory', 'memories')}: ` +
      listText(names, memories.length);
    diagnostics.add('state-unused', message, memorySpan(circuit, memories[0]!));
  }
}
