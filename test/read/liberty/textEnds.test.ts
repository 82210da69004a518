import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  bareLineEnd,
  endOfArguments,
  endOfGroup,
  firstBareString,
} from '../../../compiler/read/liberty/textEnds.js';

const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text);

/** The end of a nest, found character by character with the state written out. */
function slowEnd(text: string, open: string, close: string): number {
  let state: 'text' | 'string' | 'block' | 'line' = 'text';
  let depth = 1;
  for (let i = 0; i < text.length; i++) {
    const char = text[i]!;
    const pair = text.slice(i, i + 2);
    if (state === 'string') {
      if (char === '\\') i++;
      else if (char === '"') state = 'text';
    } else if (state === 'line') {
      if (char === '\n') state = 'text';
    } else if (state === 'block') {
      if (pair === '*/') {
        state = 'text';
        i++;
      }
    } else if (char === '"') state = 'string';
    else if (pair === '//') state = 'line';
    else if (pair === '/*') {
      state = 'block';
      i++;
    } else if (char === open) depth++;
    else if (char === close && --depth === 0) return i + 1;
  }
  return -1;
}

const text = fc
  .array(fc.constantFrom('{', '}', '}', '(', ')', ')', '"', '\\', '/', '*', '\n', 'a', ' '), {
    maxLength: 60,
  })
  .map((chars) => chars.join(''));

describe('the end of a group', () => {
  it('is where braces outside of strings and comments are even', () => {
    fc.assert(
      fc.property(text, (inside) => {
        expect(endOfGroup(bytesOf(inside), 0)).toBe(slowEnd(inside, '{', '}'));
        expect(endOfArguments(bytesOf(inside), 0)).toBe(slowEnd(inside, '(', ')'));
      }),
      { seed: 20260110, numRuns: 3000 },
    );
  });
});

describe('a line end in a string', () => {
  it.each([
    ['abc"\n', -1],
    ['a\nb"', 1],
    ['a\\\nb"', -1],
    ['a\\ \t\r\nb"', -1],
    ['a\\\nb\nc"', 4],
    ['\\"\n"', 2],
    ['a', -1],
    ['a\n', 1],
  ])('counts without a \\ before it: %j', (inside, place) => {
    expect(bareLineEnd(bytesOf(inside), 0)).toBe(place);
  });

  it('is found in the first string that has one', () => {
    const strings = '/* "\n" */ "a" // "\n\n "b\\\n" "c\n" "\n"';
    expect(firstBareString(bytesOf(strings))).toBe(strings.indexOf('"c'));
    expect(firstBareString(bytesOf('"a" "b'))).toBe(-1);
  });
});
