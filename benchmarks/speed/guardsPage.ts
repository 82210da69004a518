import type { Machine } from '../../compiler/report/bench/suite.js';

/** Nanoseconds of a cycle, without guards and with them. */
export interface GuardFigures {
  readonly stimulus: string;
  readonly plain: number;
  readonly guarded: number;
}

/** What was measured, and on what. */
export interface Guards {
  readonly machine: Machine;
  readonly seconds: number;
  readonly circuits: readonly {
    readonly circuit: string;
    readonly figures: readonly GuardFigures[];
  }[];
}

/** The measurements as a page. */
export function pageOf({ machine, seconds, circuits }: Guards): string {
  const { cores, processor, node, load } = machine;
  const rows = circuits.flatMap(({ circuit, figures }) =>
    figures.map(
      ({ stimulus, plain, guarded }) =>
        `| ${circuit} | ${stimulus} | ${plain} | ${guarded} | ${(plain / guarded).toFixed(2)} |`,
    ),
  );
  return `# What it gains to pass over what does not change

Measured on ${cores} cores of ${processor}, Node ${node}, load ${load}, by
\`npx tsx benchmarks/speed/guards.ts\`: straight-line code with the switch \`guards\` of
\`PassSwitches\` and without it. Every cycle has a stimulus row and writes a response row. Best of
many short bursts, taken in turn, ${seconds} s for each figure.

| circuit | stimulus | ns a cycle without | with | times as fast |
| --- | --- | ---: | ---: | ---: |
${rows.join('\n')}
`;
}
