import type { Desk } from '../desk.js';
import { element, setText } from '../dom.js';
import type { Signal } from '../signals.js';
import { shownValue } from '../valueBase.js';
import { shownToggle } from './shownToggle.js';

/** Some rows and what is folded open among them. */
export interface Branch {
  readonly elements: readonly HTMLElement[];
  update(): void;
}

/** A signal's name, without what stands before it, and its value. */
export function rowOf(desk: Desk, { name, width }: Signal, path: string): Branch {
  const value = element('span', { class: 'value' });
  const { root, update } = shownToggle(desk, name, name.slice(path.length));
  return {
    elements: [element('div', { class: 'row' }, root, value)],
    update: () => {
      const now = desk.session.model.peek(name);
      setText(value, shownValue(now, width, desk.base));
      value.classList.toggle('unknown', typeof now === 'string');
      update();
    },
  };
}

/** Branches one after another. */
export const joined = (...parts: readonly Branch[]): Branch => ({
  elements: parts.flatMap(({ elements }) => elements),
  update: () => {
    for (const part of parts) part.update();
  },
});
