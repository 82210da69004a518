/** A pattern for hierarchical names of signals, and whether one of them matches. */
export interface NamePattern {
  /** As the user wrote it. */
  readonly text: string;
  /** Whether a dotted name matches as a whole. */
  matches(name: string): boolean;
  /** Whether a dotted name matches what stands before `part`. */
  matchesBase(name: string): boolean;
  /** The declared indices that the pattern ends with, `[7:4]` or `[3]`, if it does. */
  readonly part: { readonly left: number; readonly right: number } | undefined;
}

/**
 * Reads a pattern: a dotted name in which `*` stands for any characters within a level and `**`
 * for any levels, none included. It may end with an index or range, which chooses a part of a
 * vector.
 */
export function namePattern(text: string): NamePattern {
  const [, base, left, right = left] = /^(.+)\[(-?\d+)(?::(-?\d+))?\]$/.exec(text) ?? [];
  const whole = expressionOf(text);
  if (base === undefined) {
    return { text, matches: (name) => whole.test(name), matchesBase: () => false, part: undefined };
  }
  const before = expressionOf(base);
  return {
    text,
    // A name of its own may end with brackets, as flattened netlists have them.
    matches: (name) => whole.test(name),
    matchesBase: (name) => before.test(name),
    part: { left: Number(left), right: Number(right) },
  };
}

function expressionOf(text: string): RegExp {
  const pieces = text.split(/(\*\*\.|\*\*|\*)/);
  const source = pieces.map((piece) => wildcards[piece] ?? literal(piece)).join('');
  return new RegExp(`^${source}$`, 's');
}

const wildcards: Readonly<Record<string, string>> = {
  '**.': '(?:.*\\.)?',
  '**': '.*',
  '*': '[^.]*',
};

const literal = (piece: string): string => piece.replace(/[\\^$.*+?()[\]{}|]/g, '\\$&');
