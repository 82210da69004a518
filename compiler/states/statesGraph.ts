import { counted, figure } from '../report/figures.js';
import type { StatesSummary } from '../run/outlets/statesSummary.js';

/**
 * States and transitions as a graph in the DOT language. The first state of each register has a
 * double outline; a node tells in how many cycles it was seen, an edge how often it was taken.
 */
export function statesGraph(circuit: string, registers: readonly StatesSummary[]): string {
  const clusters = registers.map((summary, i) => cluster(summary, `r${i}`));
  return [
    `digraph ${text(circuit)} {`,
    '  node [shape=box style=rounded fontname="sans-serif" fontsize=13 margin="0.2,0.08" class=state];',
    '  edge [fontname="sans-serif" fontsize=11 class=move];',
    ...clusters,
    '}',
    '',
  ].join('\n');
}

function cluster({ register, states, transitions }: StatesSummary, prefix: string): string {
  const numbers = new Map(states.map(({ value }, number) => [value, `${prefix}s${number}`]));
  const nodes = states.map(({ value, cycles }, number) => {
    const first = number === 0 ? ' peripheries=2 class="state first"' : '';
    const label = `${escaped(value)}\\n${counted(cycles, 'cycle')}`;
    return `    ${numbers.get(value)} [label="${label}"${first}];`;
  });
  const edges = transitions.map(({ from, to, count }) => {
    const kind = from === to ? ' class="move stay"' : '';
    return `    ${numbers.get(from)} -> ${numbers.get(to)} [label="  ${figure(count)}  "${kind}];`;
  });
  return [
    `  subgraph ${text(`cluster_${prefix}`)} {`,
    `    label=${text(register)}; fontname="sans-serif"; fontsize=14; class=register;`,
    ...nodes,
    ...edges,
    '  }',
  ].join('\n');
}

const escaped = (content: string): string => content.replace(/["\\]/g, '\\$&');

const text = (content: string): string => `"${escaped(content)}"`;
