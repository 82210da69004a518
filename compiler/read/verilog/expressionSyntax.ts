import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId } from '../names.js';

/** What every part of the syntax tree has: its place. */
export interface Placed {
  readonly start: Position;
  readonly end: Position;
}

// ---- Expressions (IEEE 1364-2005, clause 5 and annex A.8) ----

export type Expression =
  | NumberExpression
  | NameExpression
  | SelectExpression
  | PartExpression
  | (Placed & { readonly kind: 'concat'; readonly parts: readonly Expression[] })
  | (Placed & {
      readonly kind: 'replicate';
      readonly count: Expression;
      readonly parts: readonly Expression[];
    })
  | (Placed & {
      readonly kind: 'unary';
      readonly operator: UnaryOperator;
      readonly operand: Expression;
    })
  | (Placed & {
      readonly kind: 'binary';
      readonly operator: BinaryOperator;
      readonly left: Expression;
      readonly right: Expression;
    })
  | (Placed & {
      readonly kind: 'conditional';
      readonly condition: Expression;
      readonly whenTrue: Expression;
      readonly whenFalse: Expression;
    })
  /** Call of a function, or of a system function where the name begins with `$`. */
  | (Placed & {
      readonly kind: 'call';
      readonly path: readonly NameId[];
      readonly arguments: readonly Expression[];
    })
  | (Placed & { readonly kind: 'string'; readonly text: string })
  /** A real number, such as the value of a `real` parameter. */
  | (Placed & { readonly kind: 'real'; readonly value: number });

export type UnaryOperator = '+' | '-' | '!' | '~' | '&' | '~&' | '|' | '~|' | '^' | '~^';

export type BinaryOperator =
  | '+'
  | '-'
  | '*'
  | '/'
  | '%'
  | '**'
  | '=='
  | '!='
  | '==='
  | '!=='
  | '<'
  | '<='
  | '>'
  | '>='
  | '&&'
  | '||'
  | '&'
  | '|'
  | '^'
  | '~^'
  | '<<'
  | '>>'
  | '<<<'
  | '>>>';

export interface NumberExpression extends Placed {
  readonly kind: 'number';
  /** Width as written; undefined for an unsized number (32 bits at least). */
  readonly width: number | undefined;
  readonly signed: boolean;
  /** Bits that are 1; a bit set in `unknown` is x, or z where `highZ` has it too. */
  readonly value: bigint;
  readonly unknown: bigint;
  readonly highZ: bigint;
  /** Whether the leftmost digit written is x or z, which then fills to the left. */
  readonly extends: 'zero' | 'x' | 'z';
}

/** `a`, or the hierarchical `u1.a`. */
export interface NameExpression extends Placed {
  readonly kind: 'name';
  readonly path: readonly NameId[];
  /**
   * Beside each element of `path` its index, as in `g[i - 1].a`, which names an element of a
   * generate loop or an array of instances. Absent where no element has one.
   */
  readonly indices?: readonly (Expression | undefined)[];
}

/** `a[i]`: a bit of a vector or a word of an array; nests for `m[i][j]`. */
export interface SelectExpression extends Placed {
  readonly kind: 'select';
  readonly base: NameExpression | SelectExpression;
  readonly index: Expression;
}

/** `a[l:r]` (`range`), `a[l +: r]` (`up`), `a[l -: r]` (`down`). */
export interface PartExpression extends Placed {
  readonly kind: 'part';
  readonly base: NameExpression | SelectExpression;
  readonly mode: 'range' | 'up' | 'down';
  readonly left: Expression;
  readonly right: Expression;
}

/** `[left:right]`. */
export interface RangeSyntax extends Placed {
  readonly left: Expression;
  readonly right: Expression;
}

/** `(strong0, pull1)` before an assign or gate; undefined fields mean strong. */
export interface Strength {
  readonly zero: 'supply' | 'strong' | 'pull' | 'weak' | 'highz';
  readonly one: 'supply' | 'strong' | 'pull' | 'weak' | 'highz';
}
