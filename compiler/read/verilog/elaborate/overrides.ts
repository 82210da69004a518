import type { NameId } from '../../names.js';
import type { Constant } from '../scope.js';

/** A value that a `defparam` gives to a parameter some levels further down. */
export interface DeepOverride {
  /** From a name inside the module on: instances and blocks, and the parameter last. */
  readonly path: readonly NameId[];
  readonly value: Constant;
}

/** The parameter values that an instance gives to its module. */
export interface Overrides {
  readonly values: ReadonlyMap<NameId, Constant>;
  readonly deep: readonly DeepOverride[];
}

/** What an instance without `#(…)` and without `defparam` gives. */
export const noOverrides: Overrides = { values: new Map(), deep: [] };

/** A text that is the same for the same overrides only; empty for none. */
export function overridesKey({ values, deep }: Overrides): string {
  if (values.size === 0 && deep.length === 0) return '';
  const parts = [...values].map(([name, value]) => `${name}=${constantKey(value)}`).sort();
  for (const { path, value } of deep) parts.push(`${path.join('.')}=${constantKey(value)}`);
  return parts.join();
}

const constantKey = ({ width, signed, value, unknown, real }: Constant): string =>
  `${width}${signed ? 's' : 'u'}${value}/${unknown}${real === undefined ? '' : ` ${real}`}`;
