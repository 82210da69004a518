import { readCounts } from '../../../circuit/analyses/readCounts.js';
import { portBitName } from '../../../circuit/clockPorts.js';
import { counted } from '../../figures.js';
import { listText } from '../netWords.js';
import type { ProblemContext } from './context.js';

const SHOWN = 8;

/** Input ports of the top module, or bits of them, that nothing inside reads. */
export function findUnconnectedPorts({ design, words, diagnostics }: ProblemContext): void {
  const { circuit } = design;
  const reads = readCounts(circuit);
  const names: string[] = [];
  const open: number[] = [];
  for (const port of circuit.inputs) {
    const bits = Array.from(port.nets.keys()).filter((bit) => reads[port.nets[bit]!] === 0);
    open.push(...bits.map((bit) => port.nets[bit]!));
    if (bits.length === port.nets.length) names.push(...(bits.length > 0 ? [port.name] : []));
    else names.push(...bits.map((bit) => portBitName(port, bit)));
  }
  const [first] = open;
  if (first === undefined) return;
  const message =
    `${counted(open.length, 'input bit')} of the top module ${open.length === 1 ? 'is' : 'are'} ` +
    `read by nothing: ${listText(names.slice(0, SHOWN), names.length)}`;
  diagnostics.add('port-unconnected', message, words.span(first));
}
