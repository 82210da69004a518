import type { PortLayout } from '../layout.js';
import type { KeptMemory, KeptNet } from '../model/description.js';
import type { Model } from '../model/model.js';
import { wordOf } from '../model/nets.js';

/** Something with a value in each cycle: a port, a register, a kept net or a word of a memory. */
export interface Signal {
  readonly name: string;
  readonly width: number;
  readonly kind: 'input' | 'output' | 'net';
  /** Of ports. */
  readonly port: PortLayout | undefined;
}

/** All that can be shown of a model, ports first. */
export function signalsOf(model: Model): Signal[] {
  const port =
    (kind: 'input' | 'output') =>
    (found: PortLayout): Signal => ({
      name: found.name,
      width: found.width,
      kind,
      port: found,
    });
  const net = ({ name, width }: KeptNet): Signal => ({ name, width, kind: 'net', port: undefined });
  return [
    ...model.inputs.map(port('input')),
    ...model.outputs.map(port('output')),
    ...model.nets.map(net),
  ];
}

const MOST_AT_FIRST = 14;
const LEAST_AT_FIRST = 6;

/** Names of what the diagram shows at first: ports and what stands beside them, else what there is. */
export function shownAtFirst(signals: readonly Signal[]): string[] {
  const isDeep = ({ kind, name }: Signal): boolean => kind === 'net' && name.includes('.');
  const near = signals.filter((signal) => !isDeep(signal)).slice(0, MOST_AT_FIRST);
  const rest = signals.filter(isDeep).slice(0, Math.max(0, LEAST_AT_FIRST - near.length));
  return [...near, ...rest].map(({ name }) => name);
}

/** How many words a memory has. */
export const wordCount = ({ indices }: KeptMemory): number =>
  indices.reduce((count, { size }) => count * size, 1);

/** The word that stands so many behind the first one of a memory. */
export function wordAt({ name, width, indices }: KeptMemory, position: number): Signal {
  let rest = position;
  let selects = '';
  for (let i = indices.length - 1; i >= 0; i--) {
    const { low, size } = indices[i]!;
    selects = `[${low + (rest % size)}]${selects}`;
    rest = Math.floor(rest / size);
  }
  return { name: `${name}${selects}`, width, kind: 'net', port: undefined };
}

/** The word of one of some memories that a name such as `m[3]` stands for. */
export function wordNamed(memories: readonly KeptMemory[], name: string): Signal | undefined {
  for (const memory of memories) {
    if (!name.startsWith(`${memory.name}[`)) continue;
    const position = wordOf(memory.indices, name.slice(memory.name.length));
    if (position >= 0) return wordAt(memory, position);
  }
  return undefined;
}
