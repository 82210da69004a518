import { describe, expect, it } from 'vitest';
import { Keyword, keywords } from '../../../compiler/read/verilog/keywords.js';
import { Token } from '../../../compiler/read/verilog/tokens.js';
import { shown, tokensOf } from './tokens.js';

describe('names', () => {
  it('a simple name has letters, digits, _ and $', () => {
    expect(shown('a _b c3 d$1 _ A')).toEqual(
      ['a', '_b', 'c3', 'd$1', '_', 'A'].map((name) => `name ${name}`),
    );
  });

  it('an escaped name ends at white space and equals the simple one', () => {
    expect(shown('\\abc abc \\bus[3]\t\\a+b/*c*/ \\wire\n;')).toEqual([
      'name abc',
      'name abc',
      'name bus[3]',
      'name a+b/*c*/',
      'name wire',
      ';',
    ]);
  });

  it('an escaped name may end with the text', () => {
    expect(shown('\\x*')).toEqual(['name x*']);
  });

  it('case tells names apart', () => {
    expect(shown('wire Wire WIRE')).toEqual(['keyword wire', 'name Wire', 'name WIRE']);
  });

  it('a system name begins with $', () => {
    expect(shown('$display $a$b')).toEqual(['system $display', 'system $a$b']);
  });

  it('the reserved words are keywords, alone but not at the start of a name', () => {
    for (const word of keywords) {
      expect(shown(`${word} ${word}_`)).toEqual([`keyword ${word}`, `name ${word}_`]);
      expect(Keyword[word]).toBe(Token.FirstKeyword + keywords.indexOf(word));
    }
  });
});

describe('numbers', () => {
  it.each([
    ['0', ['number 0 0']],
    ['1_234', ['number 1_234 1234']],
    ['2147483647 2147483648', ['number 2147483647 2147483647', 'number 2147483648 -1']],
    ['99999999999999999999', ['number 99999999999999999999 -1']],
    ["4'b01xz", ['number 4 4', 'based 2 01xz']],
    ["8 'h F_f", ['number 8 8', 'based 16 F_f']],
    ["'o17 'd9 'D?", ['based 8 17', 'based 10 9', 'based 10 ?']],
    ["16'sHab 'Sb1", ['number 16 16', 'based s16 ab', 'based s2 1']],
    ["3/**/'b// base\n101", ['number 3 3', 'based 2 101']],
    ["4'b1?z;", ['number 4 4', 'based 2 1?z', ';']],
    ["4'b;", ['number 4 4', 'based 2 ', ';']],
    ['1.5 2e3 4.0E-2 1_0.5e+6', ['real 1.5', 'real 2e3', 'real 4.0E-2', 'real 1_0.5e+6']],
    ['1.a 2e', ['number 1 1', '.', 'name a', 'number 2 2', 'name e']],
  ])('%s', (text, tokens) => {
    expect(shown(text)).toEqual(tokens);
  });
});

describe('operators', () => {
  it('the longest one is taken', () => {
    const text =
      '( ) [ ] { } , ; : . # @ ? = + - * / % ** ! ~ & && ~& | || ~| ^ ~^ ' +
      '== != === !== < <= > >= << >> <<< >>> +: -: ->';
    expect(shown(text)).toEqual(text.split(' '));
  });

  it('they need no space between them', () => {
    expect(shown('a<=~b&&!c^~d')).toEqual([
      ...['name a', '<=', '~', 'name b', '&&', '!', 'name c', '~^', 'name d'],
    ]);
  });
});

describe('strings', () => {
  it('a quote inside is escaped', () => {
    expect(shown('"" "a // b" "c\\"d\\\\"')).toEqual([
      'string ',
      'string a // b',
      'string c\\"d\\\\',
    ]);
  });
});

describe('what is skipped', () => {
  it('white space, form feeds and line ends of all kinds', () => {
    expect(shown('\ta\r\n\f\vb\n\n')).toEqual(['name a', 'name b']);
  });

  it('comments', () => {
    expect(shown('a // b /* c\nd /* e // f\n * g **/ h /**/ i //')).toEqual([
      ...['name a', 'name d', 'name h', 'name i'],
    ]);
  });

  it('attributes, with strings in them', () => {
    expect(shown('(* keep, src = "f.v:3 *)" *) a (*x*) b')).toEqual(['name a', 'name b']);
  });

  it('a star in parentheses is no attribute', () => {
    expect(shown('@(*) @( *) @(* )')).toEqual([
      ...['@', '(', '*', ')', '@', '(', '*', ')', '@', '(', '*', ')'],
    ]);
  });

  it('a byte order mark at the start', () => {
    expect(tokensOf(Uint8Array.of(0xef, 0xbb, 0xbf, 97)).tokens).toEqual([
      { shown: 'name a', spanned: 'a' },
    ]);
  });
});

describe('spans', () => {
  it('a token spans its text', () => {
    const text = 'wire \\a[0] ; 4\'b0 "x" $f <<< é';
    expect(tokensOf(text).tokens.map(({ spanned }) => spanned)).toEqual([
      ...['wire', '\\a[0]', ';', '4', "'b0", '"x"', '$f', '<<<'],
    ]);
  });
});

describe('faults', () => {
  it.each([
    ['a /* b', "syntax-error 1:3 '/*' the comment has no end '*/'"],
    ['a /*/ b', "syntax-error 1:3 '/*' the comment has no end '*/'"],
    ['a (* b', "syntax-error 1:3 '(*' the attribute has no end '*)'"],
    ['a "b\nc', "syntax-error 1:3 '\"b' the string has no end '\"' on its line"],
    ['a "b\\"\nc', "syntax-error 1:3 '\"b\\\"' the string has no end '\"' on its line"],
    ['a "b\\', "syntax-error 1:3 '\"b\\' the string has no end '\"' on its line"],
    ['a "', "syntax-error 1:3 '\"' the string has no end '\"' on its line"],
    ['a \\ b', "syntax-error 1:3 '\\' a name is missing after '\\'"],
    ['a é€ b', "syntax-error 1:3 'é€' 'é€' has no meaning here; remove it"],
    ['a $ b', "syntax-error 1:3 '$' '$' has no meaning here; remove it"],
    [
      "a '<b",
      "syntax-error 1:3 ''' after ' a base b, o, d or h and digits are expected, such as in 4'b0101",
    ],
    [
      "a 's b",
      "syntax-error 1:3 ''' after ' a base b, o, d or h and digits are expected, such as in 4'b0101",
    ],
  ])('%j', (text, problem) => {
    expect(tokensOf(text).problems).toEqual([problem]);
  });

  it('reading goes on after a stray character', () => {
    expect(tokensOf('a é b').tokens.map((token) => token.shown)).toEqual(['name a', 'name b']);
  });
});
