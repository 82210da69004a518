import { counted } from '../../report/figures.js';
import type { StatesSummary } from '../../run/outlets/statesSummary.js';
import { escaped, round } from '../../waveform/picture/svgText.js';
import { statesGraph } from '../statesGraph.js';
import { STYLE } from './style.js';

/** The most of each register that can be drawn and still be looked at. */
const MOST_DRAWN = { states: 120, transitions: 500 } as const;

const HEAD = 76;
const SIDE = 24;
const LEAST_WIDTH = 420;

/**
 * States and transitions as one SVG picture, laid out by Graphviz; see `statesGraph`. It carries its
 * own light and dark colours, and no script. Of too many states or transitions the first are drawn.
 */
export async function statesPicture(
  circuit: string,
  cycles: number,
  registers: readonly StatesSummary[],
): Promise<string> {
  // As large as all the rest together: for those who want a picture.
  const { instance } = await import('@viz-js/viz');
  const drawn = (await instance()).renderString(statesGraph(circuit, registers.map(firstOf)), {
    format: 'svg',
    graphAttributes: { bgcolor: 'transparent' },
  });
  const [, wide, high] = /viewBox="[\d.]+ [\d.]+ ([\d.]+) ([\d.]+)"/.exec(drawn)!;
  const body = drawn.slice(drawn.indexOf('<g '), drawn.lastIndexOf('</svg>'));
  const width = round(Math.max(LEAST_WIDTH, Number(wide) + 2 * SIDE));
  const height = round(Number(high) + HEAD + SIDE);
  const title = `States of ${circuit}`;
  return `<svg xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink" viewBox="0 0 ${width} ${height}" width="${width}" height="${height}" role="img" aria-labelledby="states-title states-description">
<title id="states-title">${escaped(title)}</title>
<desc id="states-description">${escaped(description(registers, cycles))}</desc>
<style>${STYLE}</style>
<rect class="ground" width="${width}" height="${height}"/>
<text class="title" x="${SIDE}" y="34">${escaped(title)}</text>
<text class="quiet" x="${SIDE}" y="55">${escaped(caption(registers, cycles))}</text>
<g transform="translate(${SIDE} ${HEAD})">
${body}</g>
</svg>
`;
}

const isPart = ({ states, transitions }: StatesSummary): boolean =>
  states.length > MOST_DRAWN.states || transitions.length > MOST_DRAWN.transitions;

function firstOf(summary: StatesSummary): StatesSummary {
  const states = summary.states.slice(0, MOST_DRAWN.states);
  const shown = new Set(states.map(({ value }) => value));
  const transitions = summary.transitions
    .filter(({ from, to }) => shown.has(from) && shown.has(to))
    .slice(0, MOST_DRAWN.transitions);
  return { ...summary, states, transitions };
}

function caption(registers: readonly StatesSummary[], cycles: number): string {
  const part = registers.some(isPart) ? '; the first ones of more than can be drawn' : '';
  return `${counted(cycles, 'cycle')}, the first state with a double outline${part}`;
}

const description = (registers: readonly StatesSummary[], cycles: number): string =>
  `${caption(registers, cycles)}. ${registers
    .map(
      ({ register, states, transitions }) =>
        `${register} has been in ${counted(states.length, 'state')} and taken ` +
        `${counted(transitions.length, 'transition')}.`,
    )
    .join(' ')}`;
