import { NO_ROOTS } from '../../../circuit/analyses/rootSets.js';
import { NO_NET } from '../../../circuit/ids.js';
import { memoryWrites } from '../../../circuit/memoryPorts.js';
import { writePins } from '../../../circuit/memoryTable.js';
import { counted } from '../../figures.js';
import { gatedClocks } from '../gatedClocks.js';
import { memorySpan } from '../memorySummary.js';
import { listText } from '../netWords.js';
import type { ProblemContext } from './context.js';

const SHOWN = 4;

/** Clocks that are guessed, gated, read as data or missing. */
export function findClockProblems(context: ProblemContext): void {
  findGuessed(context);
  findUnclocked(context);
  findUnclockedWrites(context);
  findClocksAsData(context);
  findGated(context);
}

function findGuessed({ design: { clocks }, words, diagnostics }: ProblemContext): void {
  const { ambiguous, ports } = clocks;
  if (ambiguous.length === 0) return;
  const list = listText(ambiguous.slice(0, 8), ambiguous.length);
  const message =
    `which input is the clock cannot be told, so all that reach clock pins are taken: ${list}; ` +
    'a name such as clk would settle it';
  const first = ports.find(({ name }) => name === ambiguous[0]);
  diagnostics.add('clock-guessed', message, first && words.span(first.net));
}

function findUnclocked({ design, roots, words, diagnostics }: ProblemContext): void {
  const { output } = design.circuit.registers;
  const unclocked = output.filter((_, r) => roots.registers.roots[r] === NO_ROOTS);
  if (unclocked.length === 0) return;
  const message =
    `no clock port moves the clock pin of ${counted(unclocked.length, 'register')}: ` +
    words.list(unclocked);
  diagnostics.add('register-unclocked', message, words.span(unclocked[0]!));
}

function findUnclockedWrites({ design: { circuit }, roots, diagnostics }: ProblemContext): void {
  const unclocked = memoryWrites(circuit).filter(
    (_, port) => roots.writes.roots[port] === NO_ROOTS,
  );
  if (unclocked.length === 0) return;
  const memories = [...new Set(unclocked.map(({ memory }) => memory))];
  const names = memories.slice(0, SHOWN).map((number) => circuit.memories[number]!.name);
  const message =
    `no clock port moves the clock of ${counted(unclocked.length, 'write port')} of memories: ` +
    listText(names, memories.length);
  diagnostics.add('register-unclocked', message, memorySpan(circuit, memories[0]!));
}

function findGated({ design: { circuit }, roots, words, diagnostics }: ProblemContext): void {
  const gated = gatedClocks(circuit, roots);
  if (gated.length === 0) return;
  const names = gated
    .slice(0, SHOWN)
    .map(({ net, registers }) => `${words.placed(net)} for ${counted(registers, 'register')}`);
  const what = `${counted(gated.length, 'clock net')} ${gated.length === 1 ? 'is' : 'are'}`;
  const message = `${what} gated: ${listText(names, gated.length)}`;
  diagnostics.add('clock-gated', message, words.span(gated[0]!.net));
}

function findClocksAsData(context: ProblemContext): void {
  const { design, words, diagnostics } = context;
  const uses = dataUses(context);
  const [first] = uses;
  if (first === undefined) return;
  const { ports } = design.clocks;
  const clocks = new Set(uses.flatMap(({ net }) => rootsOf(context, net)));
  const names = [...clocks].sort((p, q) => p - q).map((port) => ports[port]!.name);
  const which = names.length === 0 ? 'a clock is' : clocksText(names);
  const message =
    `${which} read as data in ${counted(uses.length, 'place')}: ` +
    listText(
      uses.slice(0, SHOWN).map(({ reader }) => reader),
      uses.length,
    );
  diagnostics.add('clock-as-data', message, words.span(first.net));
}

const clocksText = (names: readonly string[]): string =>
  `${listText(names.slice(0, SHOWN), names.length)} ${names.length === 1 ? 'is' : 'are'}`;

const rootsOf = ({ roots }: ProblemContext, net: number): readonly number[] =>
  roots.sets.members(roots.reaching[net]!);

interface DataUse {
  /** The net that the clock arrives on. */
  readonly net: number;
  readonly reader: string;
}

/** Where nets that a clock port reaches through gates are data, a set, a reset or an output. */
function dataUses(context: ProblemContext): DataUse[] {
  const { design, roots, words } = context;
  const { registers, latches, outputs } = design.circuit;
  const uses: DataUse[] = [];
  const note = (net: number, reader: () => string): void => {
    if (net === NO_NET || roots.reaching[net] === NO_ROOTS) return;
    uses.push({ net, reader: uses.length < SHOWN ? reader() : '' });
  };
  for (const { output, data, set, reset } of [registers, latches]) {
    output.forEach((net, entry) => {
      note(data[entry]!, () => words.placed(net));
      note(set[entry]!, () => `the set of ${words.placed(net)}`);
      note(reset[entry]!, () => `the reset of ${words.placed(net)}`);
    });
  }
  for (const { memory, port } of memoryWrites(design.circuit)) {
    const { name } = design.circuit.memories[memory]!;
    const [, ...pins] = writePins(port);
    for (const net of pins) note(net, () => `memory ${name}`);
  }
  for (const port of outputs) {
    const clocked = port.nets.find((net) => roots.reaching[net] !== NO_ROOTS);
    if (clocked !== undefined) note(clocked, () => `output ${port.name}`);
  }
  return uses;
}
