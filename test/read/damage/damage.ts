import fc from 'fast-check';

/** What is done to a text: to its bytes or to its tokens, all places counted modulo its length. */
export type Damage =
  | { readonly kind: 'delete'; readonly at: number; readonly length: number }
  | { readonly kind: 'repeat'; readonly at: number; readonly length: number }
  | { readonly kind: 'swap'; readonly at: number; readonly other: number; readonly length: number }
  | { readonly kind: 'truncate'; readonly at: number }
  | { readonly kind: 'insert'; readonly at: number; readonly text: Uint8Array }
  | { readonly kind: 'deleteTokens'; readonly at: number; readonly length: number }
  | { readonly kind: 'repeatToken'; readonly at: number }
  | { readonly kind: 'swapTokens'; readonly at: number; readonly other: number }
  | { readonly kind: 'copyToken'; readonly at: number; readonly other: number }
  | { readonly kind: 'replaceToken'; readonly at: number; readonly text: string };

const place = fc.nat(0x7fffffff);
const few = fc.oneof(fc.integer({ min: 1, max: 4 }), fc.integer({ min: 1, max: 200 }));

/** Words that mean something to one of the readers, and numbers that are too large. */
const words = [
  ...['module', 'endmodule', 'begin', 'end', 'case', 'endcase', 'if', 'else', 'for', 'generate'],
  ...['endgenerate', 'input', 'output', 'inout', 'wire', 'reg', 'assign', 'always', 'initial'],
  ...['posedge', 'function', 'endfunction', 'task', 'endtask', 'parameter', 'defparam', 'table'],
  ...['endtable', 'primitive', 'endprimitive', 'integer', 'genvar', 'signed', 'supply0', 'tri1'],
  ...['nand', 'bufif1', 'tran', 'repeat', 'while', 'disable', 'specify', 'real', 'casez'],
  ...[
    '`define A `A',
    '`include "a"',
    '`ifdef A',
    '`endif',
    '`A',
    '`',
    '//',
    '/*',
    '*/',
    '(*',
    '*)',
  ],
  ...['cell', 'pin', 'ff', 'latch', 'function :', 'statetable', 'bus', 'DFF', 'NOT', 'INPUT'],
  ...[
    '(',
    ')',
    '[',
    ']',
    '{',
    '}',
    ';',
    ',',
    ':',
    '.',
    '=',
    '<=',
    '?',
    '#',
    '@',
    '*',
    '"',
    "'",
    '\\',
  ],
  ...[
    '0',
    '1',
    '7',
    '4294967296',
    '99999999',
    "1'b0",
    "8'hxz",
    "'bz",
    '1e99',
    '3.5',
    '$signed',
    'ä',
  ],
];

/** One random damage; the simplest takes a byte away. */
export const damage: fc.Arbitrary<Damage> = fc.oneof(
  fc.record({ kind: fc.constant('delete' as const), at: place, length: few }),
  fc.record({ kind: fc.constant('repeat' as const), at: place, length: few }),
  fc.record({ kind: fc.constant('swap' as const), at: place, other: place, length: few }),
  fc.record({ kind: fc.constant('truncate' as const), at: place }),
  fc.record({
    kind: fc.constant('insert' as const),
    at: place,
    text: fc.uint8Array({ minLength: 1, maxLength: 6 }),
  }),
  fc.record({ kind: fc.constant('deleteTokens' as const), at: place, length: few }),
  fc.record({ kind: fc.constant('repeatToken' as const), at: place }),
  fc.record({ kind: fc.constant('swapTokens' as const), at: place, other: place }),
  fc.record({ kind: fc.constant('copyToken' as const), at: place, other: place }),
  fc.record({
    kind: fc.constant('replaceToken' as const),
    at: place,
    text: fc.constantFrom(...words),
  }),
);

/** Does some damages to a text, one after another. */
export function damaged(bytes: Uint8Array, damages: readonly Damage[]): Uint8Array {
  return damages.reduce(damagedOnce, bytes);
}

function damagedOnce(bytes: Uint8Array, damage: Damage): Uint8Array {
  const at = damage.at % Math.max(1, bytes.length);
  switch (damage.kind) {
    case 'delete':
      return joined(bytes.subarray(0, at), bytes.subarray(at + damage.length));
    case 'repeat':
      return joined(bytes.subarray(0, at + damage.length), bytes.subarray(at));
    case 'swap':
      return swapped(bytes, at, damage.other % Math.max(1, bytes.length), damage.length);
    case 'truncate':
      return bytes.subarray(0, at);
    case 'insert':
      return joined(bytes.subarray(0, at), damage.text, bytes.subarray(at));
    default:
      return tokensDamaged(bytes, damage);
  }
}

function swapped(bytes: Uint8Array, one: number, other: number, length: number): Uint8Array {
  const [first, second] = one < other ? [one, other] : [other, one];
  const most = Math.min(length, second - first, bytes.length - second);
  const result = bytes.slice();
  result.set(bytes.subarray(second, second + most), first);
  result.set(bytes.subarray(first, first + most), second);
  return result;
}

type TokenDamage = Exclude<Damage, { kind: 'delete' | 'repeat' | 'swap' | 'truncate' | 'insert' }>;

// Latin-1 keeps each byte a character, and the other way round.
const TOKEN = /\w+|\s+|[^\w\s]/g;

// Around the place alone, as a text may have megabytes.
const NEAR = 2000;

function tokensDamaged(bytes: Uint8Array, damage: TokenDamage): Uint8Array {
  const from = Math.max(0, (damage.at % Math.max(1, bytes.length)) - NEAR / 2);
  const part = Buffer.from(bytes.subarray(from, from + NEAR)).toString('latin1');
  const tokens: string[] = part.match(TOKEN) ?? [];
  const pick = (place: number): number => place % Math.max(1, tokens.length);
  const at = pick(damage.at);
  const token = tokens[at] ?? '';
  switch (damage.kind) {
    case 'deleteTokens':
      tokens.splice(at, damage.length);
      break;
    case 'repeatToken':
      tokens.splice(at, 0, token, ' ');
      break;
    case 'swapTokens':
      tokens[at] = tokens[pick(damage.other)] ?? '';
      tokens[pick(damage.other)] = token;
      break;
    case 'copyToken':
      tokens[at] = tokens[pick(damage.other)] ?? '';
      break;
    case 'replaceToken':
      tokens[at] = ` ${damage.text} `;
      break;
  }
  const text = Buffer.from(tokens.join(''), 'latin1');
  return joined(bytes.subarray(0, from), text, bytes.subarray(from + NEAR));
}

function joined(...parts: readonly Uint8Array[]): Uint8Array {
  return new Uint8Array(Buffer.concat(parts));
}
