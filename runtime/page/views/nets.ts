import type { Desk, View } from '../desk.js';
import { element, setText } from '../dom.js';
import type { Signal } from '../signals.js';
import { type Branch, joined, rowOf } from './signalRow.js';

/** More rows than these are not laid out under one heading or found by one search. */
const MOST_ROWS = 300;

interface Folder {
  readonly children: Map<string, Folder>;
  readonly signals: Signal[];
}

/** Registers and kept nets as the hierarchy has them; what is folded away costs nothing. */
export function netPanel(desk: Desk): View {
  const nets = desk.session.signals.filter(({ kind }) => kind === 'net');
  const tree = element('div', { class: 'tree' });
  const search = element('input', {
    type: 'search',
    placeholder: 'find by name',
    'aria-label': 'find registers and nets by name',
  });
  const count = element('span', { class: 'quiet', 'aria-live': 'polite' });
  let shown: Branch;
  const rebuild = (): void => {
    const wanted = search.value.trim().toLowerCase();
    const found = nets.filter(({ name }) => name.toLowerCase().includes(wanted));
    setText(count, wanted === '' ? '' : `${found.length.toLocaleString('en-US')} found`);
    shown = wanted === '' ? branchOf(desk, treeOf(nets), '') : listOf(desk, found, '');
    tree.classList.toggle('found', wanted !== '');
    tree.replaceChildren(...shown.elements);
    desk.refresh();
  };
  search.addEventListener('input', rebuild);
  rebuild();
  const none = 'There are no registers and no kept nets that are not ports.';
  const root = element(
    'section',
    { 'aria-labelledby': 'nets' },
    element('h2', { id: 'nets' }, 'Inside'),
    ...(nets.length > 0
      ? [element('p', { class: 'search' }, search, count), tree]
      : [element('p', { class: 'quiet' }, none)]),
  );
  return {
    root,
    update: () => {
      if (desk.session.fault === undefined) shown.update();
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

function branchOf(desk: Desk, { children, signals }: Folder, path: string): Branch {
  const list = listOf(desk, signals, path);
  const folders = Array.from(children, ([name, folder]) =>
    folderOf(desk, folder, name, `${path}${name}.`),
  );
  return joined(list, ...folders);
}

/** A folder that is laid out when it is opened. */
function folderOf(desk: Desk, folder: Folder, name: string, path: string): Branch {
  const inside = element('div', { class: 'tree' });
  const details = element('details', {}, element('summary', {}, name), inside);
  let content: Branch | undefined;
  details.addEventListener('toggle', () => {
    content = details.open ? branchOf(desk, folder, path) : undefined;
    inside.replaceChildren(...(content?.elements ?? []));
    desk.refresh();
  });
  return { elements: [details], update: () => content?.update() };
}

function listOf(desk: Desk, signals: readonly Signal[], path: string): Branch {
  const rows = signals.slice(0, MOST_ROWS).map((signal) => rowOf(desk, signal, path));
  const rest = signals.length - rows.length;
  if (rest === 0) return joined(...rows);
  const words = `and ${rest.toLocaleString('en-US')} more: find them by name`;
  return joined(...rows, { elements: [element('p', { class: 'quiet' }, words)], update: () => {} });
}
