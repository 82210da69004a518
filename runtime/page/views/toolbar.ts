import type { Desk, View } from '../desk.js';
import { button, element, freshId, setText } from '../dom.js';
import type { Base } from '../valueBase.js';

const RATES: readonly (readonly [string, number])[] = [
  ['1 cycle/s', 1],
  ['5 cycles/s', 5],
  ['20 cycles/s', 20],
  ['60 cycles/s', 60],
  ['1,000 cycles/s', 1e3],
  ['100,000 cycles/s', 1e5],
  ['as fast as it goes', Number.POSITIVE_INFINITY],
];

const MOST_LEAP = 1_000_000_000;

/** Stepping, running, the rate, and where one is. */
export function toolbar(desk: Desk): View {
  const run = button('Run', () => desk.run(!desk.isRunning), { class: 'main' });
  const count = element('input', {
    type: 'number',
    min: 1,
    max: MOST_LEAP,
    value: 100,
    'aria-label': 'cycles in a leap',
  });
  const cycle = element('span', { class: 'number' });
  const rate = element('span', { class: 'quiet' });
  const leap = (): void => {
    const cycles = Number(count.value);
    if (Number.isInteger(cycles) && cycles > 0 && cycles <= MOST_LEAP) desk.leap(cycles);
    else
      desk.say(
        `Give a whole number of cycles, from 1 to ${MOST_LEAP.toLocaleString('en-US')}.`,
        true,
      );
  };
  const root = element(
    'section',
    { class: 'toolbar', 'aria-label': 'clock' },
    element(
      'div',
      { class: 'group' },
      run,
      button('Step', () => desk.step(1)),
      button('Leap', leap),
      count,
      button('Reset', () => desk.reset()),
    ),
    element('div', { class: 'group' }, rateChoice(desk), baseChoice(desk)),
    element('div', { class: 'group where' }, rate, element('span', {}, 'cycle '), cycle),
  );
  return {
    root,
    update: () => {
      setText(run, desk.isRunning ? 'Stop' : 'Run');
      setText(cycle, desk.session.model.cycle.toLocaleString('en-US'));
      setText(rate, desk.isRunning && desk.measured > 0 ? rateText(desk.measured) : '');
    },
  };
}

function rateChoice(desk: Desk): HTMLElement {
  const id = freshId();
  const choice = element(
    'select',
    { id },
    ...RATES.map(([text], i) => element('option', { value: i, selected: i === 2 }, text)),
  );
  desk.rate = RATES[2]![1];
  choice.addEventListener('change', () => {
    desk.rate = RATES[Number(choice.value)]![1];
  });
  return element('span', { class: 'pair' }, element('label', { for: id }, 'Rate'), choice);
}

function baseChoice(desk: Desk): HTMLElement {
  const id = freshId();
  const names: Record<Base, string> = { hex: 'hexadecimal', decimal: 'decimal', binary: 'binary' };
  const choice = element(
    'select',
    { id },
    ...Object.entries(names).map(([value, text]) => element('option', { value }, text)),
  );
  choice.addEventListener('change', () => {
    desk.base = choice.value as Base;
    desk.refresh();
  });
  return element('span', { class: 'pair' }, element('label', { for: id }, 'Numbers'), choice);
}

function rateText(perSecond: number): string {
  if (perSecond >= 1e6) return `${(perSecond / 1e6).toPrecision(3)} million a second`;
  if (perSecond >= 1e4) return `${Math.round(perSecond / 1e3)} thousand a second`;
  return `${Math.round(perSecond)} a second`;
}
