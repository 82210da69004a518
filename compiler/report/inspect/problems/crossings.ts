import { Crossings } from '../../../circuit/analyses/crossings.js';
import { counted } from '../../figures.js';
import { listText } from '../netWords.js';
import type { ProblemContext } from './context.js';

const SHOWN = 4;

/** Several clock ports, and values that go from registers on one to registers on another. */
export function findCrossings(context: ProblemContext): void {
  const { design, words, diagnostics } = context;
  const { ports } = design.clocks;
  if (ports.length < 2) return;
  const names = ports.slice(0, 8).map(({ name }) => name);
  const message = `${ports.length} clock ports, which tick together by themselves: ${listText(names, ports.length)}`;
  diagnostics.add('clock-several', message, words.span(ports[1]!.net));
  reportCrossings(context);
}

function reportCrossings({ design, roots, words, diagnostics }: ProblemContext): void {
  const { circuit, clocks } = design;
  const { output } = circuit.registers;
  const crossings = new Crossings(circuit, roots);
  const { captures } = crossings;
  if (captures.length === 0) return;
  const clockOf = (register: number): string => {
    const members = roots.sets.members(roots.registers.roots[register]!);
    return members.map((port) => clocks.ports[port]!.name).join(' and ') || 'many clocks';
  };
  const shown = Array.from(captures.subarray(0, SHOWN), (register) => {
    const { from, to, memory } = crossings.into(register);
    const ends = [from, to].map((r) =>
      r < 0
        ? `memory ${circuit.memories[memory!]!.name}`
        : `${words.placed(output[r]!)} on ${clockOf(r)}`,
    );
    return ends.join(' to ');
  });
  const message =
    `${counted(captures.length, 'register')} capture${captures.length === 1 ? 's' : ''} values ` +
    `from ${circuit.memories.length > 0 ? 'registers and memories' : 'registers'} on another clock: ${listText(shown, captures.length)}`;
  diagnostics.add('clock-crossing', message, words.span(output[captures[0]!]!));
}
