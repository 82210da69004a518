import type { KeptMemory } from '../../model/description.js';
import { wordOf } from '../../model/nets.js';
import type { Desk, View } from '../desk.js';
import { button, element, freshId, setText } from '../dom.js';
import { wordAt, wordCount } from '../signals.js';
import { type Branch, joined, rowOf } from './signalRow.js';

/** Words of a memory that are shown at a time. */
const WINDOW = 16;
/** Bits of a word that takes little room, even where it is written in binary. */
const SHORT = 8;

/** The memories, each with some of its words. */
export function memoryPanel(desk: Desk): View {
  const parts = desk.session.model.memories.map((memory) => memoryOf(desk, memory));
  const all = joined(...parts);
  const root = element(
    'section',
    { 'aria-labelledby': 'memories', hidden: parts.length === 0 },
    element('h2', { id: 'memories' }, 'Memories'),
    ...all.elements,
  );
  return {
    root,
    update: () => {
      if (desk.session.fault === undefined) all.update();
    },
  };
}

function memoryOf(desk: Desk, memory: KeptMemory): Branch {
  const { name, width, indices } = memory;
  const words = wordCount(memory);
  const rows = element('div', { class: width > SHORT ? 'tree' : 'tree short' });
  const [id, problemId] = [freshId(), freshId()];
  const field = element('input', { type: 'text', id, size: 8, spellcheck: 'false' });
  const problem = element('span', { id: problemId, class: 'problem' });
  let shown = joined();
  let first = 0;
  const show = (position: number): void => {
    first = Math.max(0, Math.min(words - WINDOW, position));
    const places = Array.from({ length: Math.min(WINDOW, words) }, (_, i) => first + i);
    shown = joined(...places.map((place) => rowOf(desk, wordAt(memory, place), name)));
    rows.replaceChildren(...shown.elements);
    field.value = wordAt(memory, first)
      .name.slice(name.length + 1, -1)
      .replaceAll('][', ', ');
    field.removeAttribute('aria-invalid');
    field.removeAttribute('aria-describedby');
    setText(problem, '');
    desk.refresh();
  };
  field.addEventListener('change', () => {
    const texts = field.value.split(/[\s,[\]]+/).filter((text) => text !== '');
    const position = wordOf(indices, texts.map((text) => `[${Number(text)}]`).join(''));
    if (position >= 0) {
      show(position);
      return;
    }
    const ranges = indices.map(({ low, size }) => `${low} to ${low + size - 1}`).join(', ');
    field.setAttribute('aria-invalid', 'true');
    field.setAttribute('aria-describedby', problemId);
    setText(problem, `${name} has words ${ranges}.`);
    desk.say(`${name} has words ${ranges}.`, true);
  });
  const sizes = indices.map(({ size }) => size.toLocaleString('en-US')).join(' × ');
  const heading = element(
    'div',
    { class: 'heading' },
    element('h3', {}, name),
    element('span', { class: 'quiet' }, `${sizes} words of ${width} bits`),
    element(
      'span',
      { class: 'group' },
      element('label', { for: id }, 'from'),
      field,
      button('◂', () => show(first - WINDOW), { 'aria-label': `earlier words of ${name}` }),
      button('▸', () => show(first + WINDOW), { 'aria-label': `later words of ${name}` }),
    ),
    problem,
  );
  field.setAttribute('aria-label', `first word of ${name} shown, from`);
  show(0);
  return { elements: [heading, rows], update: () => shown.update() };
}
