import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import { walk } from '../behaviour/index.js';
import type { Expression, Statement } from '../syntax.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import type { SignalValues } from './template.js';

/** The widest signal whose values have names: a value is a number of 32 bits. */
const MOST_BITS = 32;

const equalities: ReadonlySet<unknown> = new Set(['==', '!=', '===', '!==']);

const none: readonly SignalValues[] = [];

type Pair = readonly [signal: Expression, value: Expression];

/**
 * The values that processes and assignments beside them give to signals, or compare these with, by
 * the names of parameters: mostly the states of a machine. A value with two names has none, and a
 * single value with a name is a limit rather than a state.
 */
export function valueNamesOf({
  processes,
  assigns,
  names: texts,
}: ModuleBody): readonly SignalValues[] {
  if (processes.length === 0) return none;
  const found = new Map<NetId, { nets: readonly NetId[]; names: Map<number, NameId> }>();
  const twice = new Set<string>();
  const note = (scope: BlockScope, [signal, value]: Pair): void => {
    if (signal.kind !== 'name' || value.kind !== 'name' || value.path.length > 1) return;
    const constant = scope.resolve(value.path);
    if (constant?.kind !== 'parameter' || constant.value.unknown !== 0n) return;
    const target = signal.indices === undefined ? scope.resolve(signal.path) : undefined;
    if (target?.kind !== 'signal' || target.nets.length > MOST_BITS) return;
    const code = constant.value.value;
    if (code >= 2n ** BigInt(target.nets.length)) return;
    const [key] = target.nets;
    const known = found.get(key!) ?? { nets: target.nets, names: new Map<number, NameId>() };
    found.set(key!, known);
    const before = known.names.get(Number(code));
    if (before === undefined) known.names.set(Number(code), value.path[0]!);
    else if (before !== value.path[0]) twice.add(`${key} ${code}`);
  };
  const look = (scope: BlockScope, tree: unknown): void =>
    walk(tree, (node) => {
      for (const pair of pairsOf(node as Statement | Expression)) note(scope, pair);
      return true;
    });
  for (const { scope, item } of processes) look(scope, item.body);
  for (const { scope, item } of assigns) look(scope, item.value);
  const named = [...found].map(([key, { nets, names }]) => ({
    nets,
    names: new Map(
      [...names].flatMap(([code, name]): [number, string][] =>
        twice.has(`${key} ${code}`) ? [] : [[code, texts.text(name)]],
      ),
    ),
  }));
  return named.filter(({ names }) => names.size > 1);
}

// Signals, and values that they may be given or compared with, in one node of the syntax tree.
function pairsOf(node: Statement | Expression): Pair[] {
  if (node.kind === 'assign') {
    const { target, value } = node;
    return chosenBy(value).map((each): Pair => [target, each]);
  }
  if (node.kind === 'case') {
    const { subject, items } = node;
    return items.flatMap(({ labels }) => labels.map((label): Pair => [subject, label]));
  }
  if (node.kind === 'binary') {
    const { operator, left, right } = node;
    if (equalities.has(operator))
      return [
        [left, right],
        [right, left],
      ];
  }
  return [];
}

/** What a conditional may give. */
function chosenBy(value: Expression): Expression[] {
  if (value.kind !== 'conditional') return [value];
  return [...chosenBy(value.whenTrue), ...chosenBy(value.whenFalse)];
}
