import { caseTwins } from '../../../circuit/analyses/caseTwins.js';
import { counted } from '../../figures.js';
import { listText } from '../netWords.js';
import type { ProblemContext } from './context.js';

const SHOWN = 4;

/** Names that differ only in case. */
export function findCaseTwins({ design: { circuit }, words, diagnostics }: ProblemContext): void {
  const twins = caseTwins(circuit.hierarchy);
  if (twins.length === 0) return;
  const shown = twins.slice(0, SHOWN).map(({ first, second }) => `${first} and ${second}`);
  const message =
    `${counted(twins.length, 'pair')} of names ${twins.length === 1 ? 'differs' : 'differ'} only in the case of letters: ` +
    listText(shown, twins.length);
  const net = twins.find((pair) => pair.net !== undefined)?.net;
  diagnostics.add('name-case', message, net === undefined ? undefined : words.span(net));
}
