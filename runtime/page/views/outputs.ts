import type { Desk, View } from '../desk.js';
import { element, setText } from '../dom.js';
import { shownValue } from '../valueBase.js';
import { shownToggle } from './shownToggle.js';

/** The outputs and their values. */
export function outputPanel(desk: Desk): View {
  const { model } = desk.session;
  const rows = model.outputs.map((port) => {
    const value = element('span', { class: port.width === 1 ? 'value lamp' : 'value' });
    const { root, update } = shownToggle(desk, port.name);
    return { port, value, update, root: element('div', { class: 'row' }, root, value) };
  });
  const none = element('p', { class: 'quiet' }, 'There is no output.');
  const root = element(
    'section',
    { 'aria-labelledby': 'outputs' },
    element('h2', { id: 'outputs' }, 'Outputs'),
    ...(rows.length > 0 ? rows.map((row) => row.root) : [none]),
  );
  return {
    root,
    update: () => {
      if (desk.session.fault !== undefined) return;
      for (const { port, value, update } of rows) {
        const now = model.read(port.name);
        setText(value, shownValue(now, port.width, desk.base));
        value.classList.toggle('on', now === 1 && port.width === 1);
        value.classList.toggle('unknown', typeof now === 'string');
        update();
      }
    },
  };
}
