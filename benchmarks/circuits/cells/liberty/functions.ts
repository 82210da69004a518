import type { Expression } from '../expression.js';

/** How functions are spelled: the forms of the language are mixed in practice. */
export interface Dialect {
  readonly and: string;
  readonly or: string;
  /** Whether a complement is `x'` in place of `!x`. */
  readonly hasPostfix: boolean;
}

/** The dialects that the library's cells take in turn. */
export const dialects: readonly Dialect[] = [
  { and: ' & ', or: ' | ', hasPostfix: false },
  { and: '*', or: '+', hasPostfix: true },
  { and: ' ', or: ' + ', hasPostfix: true },
  { and: ' * ', or: ' | ', hasPostfix: false },
];

/** A function as the value of an attribute such as `function`, without the quotes. */
export function libertyFunction(given: Expression, dialect: Dialect): string {
  if (typeof given === 'string') return given;
  const [operator, ...operands] = given;
  const texts = operands.map((operand) =>
    typeof operand === 'string' ? operand : `(${libertyFunction(operand, dialect)})`,
  );
  const complement = (text: string) => (dialect.hasPostfix ? `${text}'` : `!${text}`);
  const joined = (sign: string) => texts.join(sign);
  switch (operator) {
    case 'buf':
      return texts[0]!;
    case 'not':
      return complement(texts[0]!);
    case 'and':
      return joined(dialect.and);
    case 'nand':
      return complement(`(${joined(dialect.and)})`);
    case 'or':
      return joined(dialect.or);
    case 'nor':
      return complement(`(${joined(dialect.or)})`);
    case 'xor':
      return joined(' ^ ');
    case 'xnor':
      return complement(`(${joined(' ^ ')})`);
    case 'mux': {
      const [select, zero, one] = texts;
      const { and, or } = dialect;
      return `(${complement(select!)}${and}${zero})${or}(${select}${and}${one})`;
    }
  }
}
