import type { Hierarchy, ModuleNames, Signal } from './hierarchy.js';

/** A signal that a scope gets besides its own. */
export interface AddedSignal extends Omit<Signal, 'offset' | 'width'> {
  readonly scope: number;
  /** `nets[0]` is the rightmost bit. */
  readonly nets: readonly number[];
}

/** A hierarchy with further signals in some of its scopes, behind their own; scopes stay as they are. */
export function withSignals(hierarchy: Hierarchy, added: readonly AddedSignal[]): Hierarchy {
  const { scopeStart, netOf } = hierarchy;
  const modules = [...hierarchy.modules];
  const scopeModule = hierarchy.scopeModule.slice();
  const start = scopeStart.slice();
  const whole = new Uint32Array(
    netOf.length + added.reduce((sum, { nets }) => sum + nets.length, 0),
  );
  let end = 0;
  for (let scope = 0; scope < scopeStart.length; scope++) {
    const own = netOf.subarray(scopeStart[scope]!, scopeStart[scope + 1] ?? netOf.length);
    start[scope] = end;
    whole.set(own, end);
    end += own.length;
    const signals = added.filter((signal) => signal.scope === scope);
    if (signals.length === 0) continue;
    scopeModule[scope] = modules.push(withOthers(modules[scopeModule[scope]!]!, signals)) - 1;
    for (const { nets } of signals) {
      whole.set(nets, end);
      end += nets.length;
    }
  }
  return { ...hierarchy, modules, scopeModule, scopeStart: start, netOf: whole };
}

function withOthers(
  { name, signals, bits }: ModuleNames,
  added: readonly AddedSignal[],
): ModuleNames {
  const all = [...signals];
  let offset = bits;
  for (const { scope, nets, ...shape } of added) {
    all.push({ ...shape, offset, width: nets.length });
    offset += nets.length;
  }
  return { name, signals: all, bits: offset };
}
