import type { Desk } from '../desk.js';
import { element } from '../dom.js';

/** A signal's name with a box that puts it into the diagram. */
export function shownToggle(
  desk: Desk,
  name: string,
  text: string = name,
): { root: HTMLElement; update: () => void } {
  const box = element('input', { type: 'checkbox', 'aria-label': `${name} in the diagram` });
  box.addEventListener('change', () => {
    desk.session.show(name, box.checked);
    desk.refresh();
  });
  const root = element('label', { class: 'name' }, box, element('span', { title: name }, text));
  return {
    root,
    update: () => {
      const isShown = desk.session.shown.includes(name);
      if (box.checked !== isShown) box.checked = isShown;
    },
  };
}
