import { counted, figure } from '../../report/figures.js';

/** What a register vector has been in a run: its states, and how it went from one to another. */
export interface StatesSummary {
  /** As it was asked for: a signal by its hierarchical name, or several as `{a, b}`. */
  readonly register: string;
  /** In the order in which they came first. */
  readonly states: readonly StateSummary[];
  /** Likewise; a state that stays goes on to itself. */
  readonly transitions: readonly TransitionSummary[];
  /** The last cycle that counts, where there were too many states or transitions to go on. */
  readonly followedTo?: number;
}

/** A state. */
export interface StateSummary {
  /** As a response table has it, or the name of the constant that the text has for it. */
  readonly value: string;
  /** Cycles in which it was sampled, and the first of them. */
  readonly cycles: number;
  readonly first: number;
}

/** A step from the state of one cycle to that of the next. */
export interface TransitionSummary {
  readonly from: string;
  readonly to: string;
  readonly count: number;
  /** The cycle in which it first led to the new state. */
  readonly first: number;
}

/** States, and next states of one, that are written out. */
const MOST_LINES = 40;
const MOST_NEXT = 6;

/** The states of registers as lines of text. */
export function statesLines(registers: readonly StatesSummary[] = []): string[] {
  return registers.flatMap((summary) => {
    const { register, states, transitions } = summary;
    const rows = states.slice(0, MOST_LINES).map((state) => rowOf(state, transitions));
    const head = ['state', 'first cycle', 'cycles', 'next: times (first cycle)'];
    const rest = states.length - rows.length;
    return [
      `${register}: ${counted(states.length, 'state')}, ${counted(transitions.length, 'transition')}`,
      ...(rows.length === 0 ? [] : aligned([head, ...rows])),
      ...(rest > 0 ? [`  and ${counted(rest, 'more state')}`] : []),
    ];
  });
}

function rowOf({ value, first, cycles }: StateSummary, all: readonly TransitionSummary[]) {
  const next = all.filter(({ from }) => from === value);
  const words = next
    .slice(0, MOST_NEXT)
    .map(({ to, count, first }) => `${to}: ${figure(count)} (${figure(first)})`);
  const rest = next.length - words.length;
  return [
    value,
    figure(first),
    figure(cycles),
    [...words, ...(rest > 0 ? [`${rest} more`] : [])].join(', '),
  ];
}

// Numbers to the right, the first and the last column to the left.
function aligned(rows: readonly (readonly string[])[]): string[] {
  const widths = [0, 1, 2].map((column) => Math.max(...rows.map((row) => row[column]!.length)));
  return rows.map(([state, first, cycles, next]) => {
    const cells = [
      state!.padEnd(widths[0]!),
      first!.padStart(widths[1]!),
      cycles!.padStart(widths[2]!),
      next!,
    ];
    return `  ${cells.join('  ')}`.trimEnd();
  });
}
