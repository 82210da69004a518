import type { NameId } from '../../names.js';
import type { Binding, Elaboration, Scope, Unusable } from '../scope.js';

/** The names that a function, a task or a block inside one declares, before those outside. */
export class LocalScope implements Scope {
  readonly shared: Elaboration;
  readonly #outer: Scope;
  readonly #names = new Map<NameId, Binding>();
  readonly #refused = new Map<NameId, Unusable>();

  constructor(outer: Scope) {
    this.shared = outer.shared;
    this.#outer = outer;
  }

  add(name: NameId, binding: Binding): void {
    this.#names.set(name, binding);
  }

  /** Takes note of a name that is declared with a type that cannot be built. */
  refuse(name: NameId, type: Unusable): void {
    this.#refused.set(name, type);
  }

  *visibleNames(): Iterable<string> {
    for (const name of this.#names.keys()) yield this.shared.names.text(name);
    yield* this.#outer.visibleNames?.() ?? [];
  }

  unusable(name: NameId): Unusable | undefined {
    return this.#refused.get(name) ?? this.#outer.unusable?.(name);
  }

  /** What this scope itself declares under a name. */
  own(name: NameId): Binding | undefined {
    return this.#names.get(name);
  }

  resolve(path: readonly NameId[]): Binding | undefined {
    const local = path.length === 1 ? this.#names.get(path[0]!) : undefined;
    return local ?? this.#outer.resolve(path);
  }

  /** What a called name means: a function's own name is its result, but called it is itself. */
  resolveCalled(path: readonly NameId[]): Binding | undefined {
    const local = path.length === 1 ? this.#names.get(path[0]!) : undefined;
    return local?.kind === 'routine' ? local : resolveCalled(this.#outer, path);
  }
}

/** The meaning of a name that is called, seen from a scope. */
export function resolveCalled(scope: Scope, path: readonly NameId[]): Binding | undefined {
  return scope instanceof LocalScope ? scope.resolveCalled(path) : scope.resolve(path);
}
