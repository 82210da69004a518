import type { NameId } from '../../names.js';
import { assignedNames, walk } from '../behaviour/index.js';
import type { Expression, Item, ModuleSyntax, Statement } from '../syntax.js';
import type { Located } from './body.js';

/** The names of variables that a module assigns, at power-up alone or later on too. */
interface Assigned {
  readonly later: ReadonlySet<NameId>;
  readonly atStart: ReadonlySet<NameId>;
}

const known = new WeakMap<ModuleSyntax, Assigned>();

/**
 * Whether a process does nothing in a run, because it waits for changes of variables that nothing
 * ever assigns: notifiers of timing checks, at whose violation models let their outputs be x. Where
 * `initial` gives such a variable a value, this too can do no more than assign x.
 */
export function isIdle({ scope, item }: Located<'always'>, module: ModuleSyntax): boolean {
  const { body } = item;
  if (body.kind !== 'event' || body.events === undefined) return false;
  const names: NameId[] = [];
  for (const { expression } of body.events) {
    if (expression.kind !== 'name' || expression.path.length !== 1) return false;
    const binding = scope.resolve(expression.path);
    if (binding?.kind !== 'signal' || !binding.isVariable) return false;
    names.push(expression.path[0]!);
  }
  const { later, atStart } = assignedIn(module);
  if (names.some((name) => later.has(name))) return false;
  return !names.some((name) => atStart.has(name)) || assignsUnknown(body.body);
}

function assignedIn(module: ModuleSyntax): Assigned {
  let assigned = known.get(module);
  if (assigned === undefined) {
    const later = new Set<NameId>();
    const atStart = new Set<NameId>();
    collect(module.items, later, atStart);
    assigned = { later, atStart };
    known.set(module, assigned);
  }
  return assigned;
}

function collect(tree: unknown, later: Set<NameId>, atStart: Set<NameId>): void {
  walk(tree, (node) => {
    const item = node as Item | Statement;
    if (item.kind === 'initial') {
      collect(item.body, atStart, atStart);
      return false;
    }
    if (item.kind === 'declaration') {
      for (const { name, value } of item.names) if (value !== undefined) atStart.add(name);
    } else if (item.kind === 'assign') addTargets(assignedNames(item.target), later);
    // An argument may be an output.
    else if (item.kind === 'callTask') addTargets(item.arguments.flatMap(assignedNames), later);
    return true;
  });
}

function addTargets(names: ReturnType<typeof assignedNames>, to: Set<NameId>): void {
  for (const { path } of names) to.add(path.at(-1)!);
}

/** Whether all that statements do is to assign x. */
function assignsUnknown(body: Statement): boolean {
  let isUnknown = true;
  walk(body, (node) => {
    const statement = node as Statement;
    if (statement.kind === 'assign') isUnknown &&= isX(statement.value);
    else if (statement.kind === 'callTask' || statement.kind === 'procedural') isUnknown = false;
    return isUnknown;
  });
  return isUnknown;
}

const isX = (value: Expression): boolean =>
  value.kind === 'number' && value.unknown !== 0n && value.value === 0n && value.highZ === 0n;
