import type { DiagnosticCode } from '../../../diagnostics/codes.js';
import type { NameId } from '../../names.js';
import { hintOf } from '../../nearest.js';
import type { Binding, Unusable } from '../scope.js';
import type { Expression } from '../syntax.js';
import type { Context } from './context.js';
import { resolveCalled } from './localScope.js';
import { type Placed, pathText, report } from './report.js';
import { walk } from './walk.js';

/** A name as it is used at a place; `indices` as in `NameExpression`. */
interface Named extends Placed {
  readonly path: readonly NameId[];
  readonly indices?: readonly (Expression | undefined)[];
}

/** What a name means; undefined, and a diagnostic, where it means nothing. */
export function bindingOf(named: Named, context: Context): Binding | undefined {
  return found(meaningOf(named, context), named, context);
}

/** What a name means, if anything. An index within it must be constant. */
export function meaningOf(named: Named, context: Context): Binding | undefined {
  return resolveWith(named, context, (index) => context.services.integer(index, context));
}

/** As `meaningOf` where values are not at hand: an index that is no plain number means nothing. */
export function plainMeaningOf(named: Named, context: Context): Binding | undefined {
  return resolveWith(named, context, (index) =>
    index.kind === 'number' ? Number(index.value) : undefined,
  );
}

// The elements of loops and arrays have names such as `g[0]`, as clause 12.4.1 writes them.
function resolveWith(
  { path, indices }: Named,
  { scope }: Context,
  numberOf: (index: Expression) => number | undefined,
): Binding | undefined {
  if (indices === undefined) return scope.resolve(path);
  const { names } = scope.shared;
  const elements: NameId[] = [];
  for (const [i, name] of path.entries()) {
    const index = indices[i];
    const value = index && numberOf(index);
    if (index !== undefined && value === undefined) return undefined;
    elements.push(index === undefined ? name : names.internText(`${names.text(name)}[${value}]`));
  }
  return scope.resolve(elements);
}

/** Whether a path names a system task or function. */
export function isSystemName(path: readonly NameId[], context: Pick<Context, 'scope'>): boolean {
  return path.length === 1 && context.scope.shared.names.text(path[0]!).startsWith('$');
}

/** What a name means that is called as a function or task; a diagnostic where it means nothing. */
export function calledBinding(named: Named, context: Context): Binding | undefined {
  const binding = resolveCalled(context.scope, named.path);
  if (binding !== undefined || named.path.length === 1) return found(binding, named, context);
  const { shared } = context.scope;
  const message =
    `\`${pathText(shared, named.path)}\` is no function that can be called from here: one of another ` +
    'module may name nothing but parameters and its own variables; give it its signals as arguments';
  report(shared, 'name-undeclared', named, message);
  return undefined;
}

function found(binding: Binding | undefined, named: Named, context: Context): Binding | undefined {
  if (binding !== undefined) return binding;
  const { scope } = context;
  const { shared } = scope;
  const text = pathText(shared, named.path);
  const reason = named.path.length === 1 ? scope.unusable?.(named.path[0]!) : undefined;
  const hint = reason === undefined ? hintOf(text, scope.visibleNames?.() ?? []) : '';
  const [code, message] = reason === undefined ? unknown : unusable[reason];
  report(shared, code, named, `\`${text}\` ${message}${hint}`);
  return undefined;
}

type Complaint = readonly [code: DiagnosticCode, message: string];

const unknown: Complaint = [
  'name-undeclared',
  'is not declared here; declare it or mend its spelling',
];

const unusable: Readonly<Record<Unusable, Complaint>> = {
  real: ['not-supported', 'is a real number, which has no bits; declare it as reg or integer'],
  event: [
    'not-supported',
    'is a named event, which no circuit has; set a register for one cycle instead',
  ],
  genvar: [
    'name-undeclared',
    'is a genvar, which has a value only inside its generate loop; use it there, or an integer',
  ],
  block: ['name-undeclared', 'is a block, which has no value; name a signal in it'],
  instance: ['name-undeclared', 'is an instance, which has no value; name a signal in it'],
  signal: [
    'constant-required',
    'is a signal, but a constant is needed here; use literals and parameters',
  ],
  later: ['name-undeclared', 'is declared only after this; move its declaration up'],
  faulty: ['name-undeclared', 'has no meaning, because its declaration is faulty; mend that first'],
};

/** Calls `visit` for each name that a part of the syntax tree reads or assigns. */
export function forEachName(
  tree: unknown,
  visit: (expression: Extract<Expression, { kind: 'name' }>) => void,
): void {
  walk(tree, (node) => {
    if (node.kind !== 'name') return true;
    visit(node as Extract<Expression, { kind: 'name' }>);
    return false;
  });
}

/** Reports a construct outside what can be built, with the way out. */
export function refuse(context: Context, place: Placed, message: string): void {
  report(context.scope.shared, 'not-supported', place, message);
}
