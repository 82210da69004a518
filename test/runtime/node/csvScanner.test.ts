import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CsvScanner } from '../../../runtime/node/csvScanner.js';
import { bytesOf } from '../../support/tables.js';

/** All records of a text that comes in pieces of some length. */
function recordsOf(text: string, pieceLength = 1 << 16): string[][] {
  const scanner = new CsvScanner('t.csv');
  const records: string[][] = [];
  const take = () => {
    while (scanner.next()) {
      records.push(Array.from({ length: scanner.fieldCount }, (_, i) => scanner.text(i)));
    }
  };
  for (const piece of bytesOf(text, pieceLength)) {
    scanner.push(piece);
    take();
  }
  scanner.end();
  take();
  return records;
}

describe('CsvScanner', () => {
  // The numbered rules are those of RFC 4180, section 2.
  it('separates records by line ends, with or without one at the end (rules 1 and 2)', () => {
    expect(recordsOf('aaa,bbb\r\nzzz,yyy\r\n')).toEqual([
      ['aaa', 'bbb'],
      ['zzz', 'yyy'],
    ]);
    expect(recordsOf('aaa,bbb\r\nzzz,yyy')).toEqual([
      ['aaa', 'bbb'],
      ['zzz', 'yyy'],
    ]);
    expect(recordsOf('a\nb\n')).toEqual([['a'], ['b']]);
  });

  it('keeps spaces and empty fields (rule 4)', () => {
    expect(recordsOf(' a,,b \n,\n')).toEqual([
      [' a', '', 'b '],
      ['', ''],
    ]);
  });

  it('takes quoted fields with commas, line ends and doubled quotes (rules 5 to 7)', () => {
    expect(recordsOf('"aaa","b\r\nb,b"\r\n"a""a",x\r\n')).toEqual([
      ['aaa', 'b\r\nb,b'],
      ['a"a', 'x'],
    ]);
  });

  it('skips a byte order mark and gives an empty line as one empty field', () => {
    expect(recordsOf('\ufeffa,b\n\n1,2')).toEqual([['a', 'b'], [''], ['1', '2']]);
    expect(recordsOf('\ufeff"a"\n')).toEqual([['a']]);
  });

  it('gives nothing for an empty file', () => {
    expect(recordsOf('')).toEqual([]);
  });

  it('reads the same records in pieces of any length', () => {
    const field = fc.string({
      unit: fc.constantFrom('a', '1', '"', ',', '\n', '\r', 'ä', ' '),
      maxLength: 5,
    });
    const table = fc.array(fc.array(field, { minLength: 1, maxLength: 4 }), {
      minLength: 1,
      maxLength: 6,
    });
    fc.assert(
      fc.property(table, fc.integer({ min: 1, max: 7 }), fc.boolean(), (records, length, crlf) => {
        const quoted = (text: string) =>
          /^[a1ä]+$/.test(text) ? text : `"${text.replaceAll('"', '""')}"`;
        const text = records
          .map((record) => record.map(quoted).join(',') + (crlf ? '\r\n' : '\n'))
          .join('');
        expect(recordsOf(text, length)).toEqual(records);
      }),
      { seed: 6, numRuns: 300 },
    );
  });

  it('refuses a quote that is never closed, at the quote', () => {
    expect(() => recordsOf('a,b\nä,"x\n', 3)).toThrow('t.csv:2:3: this quote is never closed');
  });

  it('refuses text behind a closing quote, at that text', () => {
    expect(() => recordsOf('"a\nb"c\n')).toThrow('t.csv:2:3: a comma or the end of the line');
    expect(() => recordsOf('"a"\rb\n', 1)).toThrow('t.csv:1:4: a comma');
  });

  it('tells line and column of a field in characters, across quoted line ends', () => {
    const scanner = new CsvScanner('t.csv');
    scanner.push(new TextEncoder().encode('"1\n\n2",äö,x\nlast,y\n'));
    scanner.end();
    scanner.next();
    expect([0, 1, 2, 3].map((field) => scanner.place(field))).toEqual([
      { line: 1, column: 2 },
      { line: 3, column: 4 },
      { line: 3, column: 7 },
      { line: 3, column: 8 },
    ]);
    scanner.next();
    expect(scanner.error(1, 'no').message).toBe('t.csv:4:6: no');
  });

  it('gives up on a record of more than 16 MiB', () => {
    const scanner = new CsvScanner('t.csv');
    const piece = new Uint8Array(1 << 23).fill(0x61);
    piece[0] = 0x22;
    scanner.push(piece);
    expect(scanner.next()).toBe(false);
    scanner.push(new Uint8Array(1 << 23).fill(0x61));
    scanner.push(Uint8Array.of(0x61));
    expect(() => scanner.push(Uint8Array.of(0x61))).toThrow('t.csv:1:1: record too long');
  });
});
