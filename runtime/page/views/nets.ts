import type { Desk, View } from '../desk.js';
import { element, setText } from '../dom.js';
import type { Signal } from '../signals.js';
import { shownValue } from '../valueBase.js';
import { shownToggle } from './shownToggle.js';

/** More rows than these are not laid out under one heading or found by one search. */
const MOST_ROWS = 300;

interface Row {
  readonly root: HTMLElement;
  update(): void;
}

interface Folder {
  readonly children: Map<string, Folder>;
  readonly signals: Signal[];
}

/** Registers and kept nets as the hierarchy has them; what is folded away costs nothing. */
export function netPanel(desk: Desk): View {
  const nets = desk.session.signals.filter(({ kind }) => kind === 'net');
  const open = new Set<Row[]>();
  const tree = element('div', { class: 'tree' });
  const search = element('input', {
    type: 'search',
    placeholder: 'find by name',
    'aria-label': 'find registers and nets by name',
  });
  const count = element('span', { class: 'quiet', 'aria-live': 'polite' });
  const rebuild = (): void => {
    open.clear();
    const wanted = search.value.trim().toLowerCase();
    const found = nets.filter(({ name }) => name.toLowerCase().includes(wanted));
    setText(count, wanted === '' ? '' : `${found.length} found`);
    if (wanted !== '') tree.replaceChildren(...rowsOf(desk, found, '', open));
    else tree.replaceChildren(...folderContent(desk, treeOf(nets), '', open));
    desk.refresh();
  };
  search.addEventListener('input', rebuild);
  rebuild();
  const root = element(
    'section',
    { 'aria-labelledby': 'nets' },
    element('h2', { id: 'nets' }, 'Inside'),
    ...(nets.length > 0
      ? [element('p', { class: 'row' }, search, count), tree]
      : [element('p', { class: 'quiet' }, 'This model has no state and no kept nets.')]),
  );
  return {
    root,
    update: () => {
      if (desk.session.fault !== undefined) return;
      for (const rows of open) for (const row of rows) row.update();
    },
  };
}

function treeOf(nets: readonly Signal[]): Folder {
  const root: Folder = { children: new Map(), signals: [] };
  for (const net of nets) {
    let folder = root;
    for (const part of net.name.split('.').slice(0, -1)) {
      let child = folder.children.get(part);
      if (child === undefined) {
        child = { children: new Map(), signals: [] };
        folder.children.set(part, child);
      }
      folder = child;
    }
    folder.signals.push(net);
  }
  return root;
}

function folderContent(
  desk: Desk,
  { children, signals }: Folder,
  path: string,
  open: Set<Row[]>,
): HTMLElement[] {
  const folders = Array.from(children, ([name, folder]) => {
    const inside = element('div', { class: 'tree' });
    const details = element('details', {}, element('summary', {}, name), inside);
    const own: Set<Row[]> = new Set();
    details.addEventListener('toggle', () => {
      for (const rows of own) open.delete(rows);
      own.clear();
      if (details.open)
        inside.replaceChildren(...folderContent(desk, folder, `${path}${name}.`, own));
      else inside.replaceChildren();
      for (const rows of own) open.add(rows);
      desk.refresh();
    });
    return details;
  });
  return [...rowsOf(desk, signals, path, open), ...folders];
}

function rowsOf(
  desk: Desk,
  signals: readonly Signal[],
  path: string,
  open: Set<Row[]>,
): HTMLElement[] {
  const rows = signals.slice(0, MOST_ROWS).map((signal) => rowOf(desk, signal, path));
  open.add(rows);
  const rest = signals.length - rows.length;
  const more = element('p', { class: 'quiet' }, `and ${rest} more: find them by name`);
  return [...rows.map(({ root }) => root), ...(rest > 0 ? [more] : [])];
}

function rowOf(desk: Desk, { name, width }: Signal, path: string): Row {
  const value = element('output', { class: 'value' });
  const { root, update } = shownToggle(desk, name, name.slice(path.length));
  return {
    root: element('div', { class: 'row' }, root, value),
    update: () => {
      const now = desk.session.model.peek(name);
      setText(value, shownValue(now, width, desk.base));
      value.classList.toggle('unknown', typeof now === 'string');
      update();
    },
  };
}
