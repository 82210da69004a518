import { Strength } from '../../../circuit/busParts.js';
import type { Strength as StrengthSyntax } from '../syntax.js';

/** With which strength something drives 0 and 1. */
export interface Strengths {
  readonly zero: Strength;
  readonly one: Strength;
}

const levels: Readonly<Record<StrengthSyntax['zero'], Strength>> = {
  supply: Strength.Supply,
  strong: Strength.Strong,
  pull: Strength.Pull,
  weak: Strength.Weak,
  highz: Strength.HighZ,
};

/** The strengths that are written; undefined for those of every gate, strong for both values. */
export function strengthsOf(strength: StrengthSyntax | undefined): Strengths | undefined {
  if (strength === undefined) return undefined;
  const zero = levels[strength.zero];
  const one = levels[strength.one];
  return zero === Strength.Strong && one === Strength.Strong ? undefined : { zero, one };
}
