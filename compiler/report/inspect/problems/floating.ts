import type { Circuit } from '../../../circuit/circuit.js';
import { GateKind } from '../../../circuit/gates.js';
import { NO_NET } from '../../../circuit/ids.js';
import { memoryWrites } from '../../../circuit/memoryPorts.js';
import { writePins } from '../../../circuit/memoryTable.js';
import { counted } from '../../figures.js';
import type { ProblemContext } from './context.js';

/** Inputs of gates and pins of state elements on named nets without driver. */
export function findFloating({ design: { circuit }, words, diagnostics }: ProblemContext): void {
  // A constant x that a text spells out has no name, and is meant.
  const isOpen = (net: number): boolean =>
    net !== NO_NET && circuit.kind[net] === GateKind.Unknown && words.hasName(net);
  const { count, readers } = openInputs(circuit, isOpen);
  if (count === 0) return;
  const message =
    `${counted(count, 'input')} of gates, registers and latches read nets without driver, ` +
    `which are x, and 0 in two-valued runs: those of ${words.list([...readers])}`;
  diagnostics.add('input-floating', message, words.span(readers.values().next().value!));
}

function openInputs(
  circuit: Circuit,
  isOpen: (net: number) => boolean,
): { count: number; readers: ReadonlySet<number> } {
  const { netCount, faninStart, fanin, registers, latches } = circuit;
  const readers = new Set<number>();
  let count = 0;
  const note = (reader: number, source: number): void => {
    if (!isOpen(source)) return;
    readers.add(reader);
    count++;
  };
  for (let net = 0; net < netCount; net++) {
    for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) note(net, fanin[i]!);
  }
  const columns = [
    [registers.output, registers.data, registers.clock, registers.set, registers.reset],
    [latches.output, latches.data, latches.enable, latches.set, latches.reset],
  ] as const;
  for (const [output, ...pins] of columns) {
    output.forEach((net, entry) => {
      for (const column of pins) note(net, column[entry]!);
    });
  }
  for (const { port } of memoryWrites(circuit)) for (const net of writePins(port)) note(net, net);
  return { count, readers };
}
