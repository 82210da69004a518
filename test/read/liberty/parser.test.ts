import { describe, expect, it } from 'vitest';
import { cellOf, cellsOf, readLibrary } from './reading.js';

/** `name: function` of the pins that have one. */
const functionsOf = (statements: string): string[] =>
  cellOf(statements).pins.flatMap((pin) =>
    pin.function === undefined ? [] : [`${pin.name}: ${pin.function.text}`],
  );

const names = (text: string): string[] => readLibrary(text).library.cells.map(({ name }) => name);

describe('a library', () => {
  it('is a group with cells inside', () => {
    const { library, problems } = readLibrary(
      'library (demo) {\n cell (A) { }\n cell ("B") { }\n}',
    );
    expect(problems).toEqual([]);
    expect(library.name).toBe('demo');
    expect(library.cells.map(({ name }) => name)).toEqual(['A', 'B']);
  });

  it('may be one of several in a file', () => {
    const text = 'library (a) { cell (A) {} }\nlibrary (b) { cell (B) {} };';
    expect(readLibrary(text).problems).toEqual([]);
    expect(names(text)).toEqual(['A', 'B']);
  });

  it('may begin with a byte order mark and have any line ends', () => {
    const text = '\ufefflibrary (t)\r\n{\r\n\tcell (A)\r\n{\r\n}\r\n}\r\n';
    expect(readLibrary(text).problems).toEqual([]);
    expect(names(text)).toEqual(['A']);
  });

  it('keeps the place of each cell name', () => {
    const text = 'library (t) { cell ( "INV" ) { } }';
    const [cell] = readLibrary(text).library.cells;
    expect(text.slice(cell!.start, cell!.end)).toBe('INV');
  });
});

describe('an attribute', () => {
  it.each([
    ['a string', 'function : "A & B";', 'A & B'],
    ['a word', 'function : A;', 'A'],
    ['words without quotes', 'function : A & !B ;', 'A & !B'],
    ['a string and more', 'function : "A" & B ;', '"A" & B'],
    ['a value on the next line', 'function :\n  "A";', 'A'],
    ['no semicolon', 'function : "A"\n', 'A'],
    ['no semicolon before a brace', 'function : "A"', 'A'],
    ['no semicolon after words', 'function : A + B\n', 'A + B'],
    ['no blanks', 'function:"A";', 'A'],
    ['a quoted name', '"function" : "A";', 'A'],
    ['a line joined to the next', 'function : \\\n "A" ;', 'A'],
    ['a comment before its value', 'function /* x : y; */ : /* "B" */ "A"; // "C"\n', 'A'],
    ['a later value', 'function : "B"; function : "A";', 'A'],
  ])('may have %s', (_what, text, value) => {
    expect(functionsOf(`pin (Y) { direction : output; ${text} }`)).toEqual([`Y: ${value}`]);
  });

  it('may have a string over several lines with a `\\` before each line end', () => {
    const text = 'pin (Y) { direction : output; function : "A & \\\n  B"; }';
    expect(functionsOf(text)).toEqual(['Y: A & \\\n  B']);
  });

  it('may have escaped quotes in its string', () => {
    const text = 'pin (Y) { direction : output; function : "\\"1A\\" & B"; }';
    expect(functionsOf(text)).toEqual(['Y: \\"1A\\" & B']);
  });

  it('needs no semicolon wherever its line ends', () => {
    const text = `area : 3.2
      cell_footprint : "x"
      pin (A) { direction : input
        capacitance : 0.1 }
      pin (Y) { function : "A"
        direction : output }`;
    expect(cellOf(text).pins.map(({ name, direction }) => `${name} ${direction}`)).toEqual([
      'A input',
      'Y output',
    ]);
  });

  it('of no account is passed over with strings, braces and parentheses in it', () => {
    const text = `comment : "} pin (X) { /* ";
      revision : 1.0 - rc1 ;
      voltage : VDD + 0.5 * (1 + 2);
      values ("1, 2", \\
        ") } 3, 4");
      pin (A) { direction : input; }`;
    expect(cellOf(text).pins.map(({ name }) => name)).toEqual(['A']);
  });

  it('may be defined by the library', () => {
    const text = `define (my_pin, cell, string);
      define_group (mine, cell);
      cell (A) { my_pin : "x"; mine (x) { function : "y"; } }`;
    expect(cellsOf(text).map(({ name }) => name)).toEqual(['A']);
  });
});

describe('a group of no account', () => {
  it.each([
    ['nested groups', 'timing () { cell_rise (t) { values ("1"); } }'],
    ['braces in strings', 'timing () { sdf_cond : "}}}}"; when : "{"; }'],
    ['braces in comments', 'timing () { /* } } */ // }\n }'],
    ['quotes in comments', 'timing () { /* " */ // "\n }'],
    ['comments in strings', 'timing () { a : "/*"; b : "//"; c : "*/"; }'],
    ['quotes in strings', 'timing () { a : "\\"}"; b : "\\\\"; }'],
    ['a slash alone', 'timing () { a : 1 / 2; }'],
    ['a comment of stars', 'timing () { /***/ /* **/ }'],
    ['words of the format', 'timing () { cell (X) { pin (Z) { } } }'],
    ['a semicolon after it', 'timing () { };'],
    ['its brace on the next line', 'timing ()\n\n{\n}'],
  ])('is passed over: %s', (_what, text) => {
    const cell = cellOf(`${text}\n pin (A) { direction : input; ${text}\n } pin (B) { }`);
    expect(cell.pins.map(({ name }) => name)).toEqual(['A', 'B']);
  });

  it('may stand in the library itself', () => {
    const text = `operating_conditions (typ) { process : 1; }
      wire_load ("10x10") { fanout_length (1, 2); }
      lu_table_template (t) { index_1 ("1, 2"); }
      cell (A) { leakage_power () { when : "!A"; value : 1; } }`;
    expect(cellsOf(text).map(({ name }) => name)).toEqual(['A']);
  });
});

describe('include_file', () => {
  const files = {
    'cells.inc': 'cell (B) { include_file ("pins.inc") }\n',
    'pins.inc': 'pin (P) { direction : input; }',
  };

  it('stands for the statements of a file', () => {
    const text = 'library (t) { cell (A) {} include_file (cells.inc); cell (C) {} }';
    const { library, problems } = readLibrary(text, files);
    expect(problems).toEqual([]);
    expect(library.cells.map(({ name }) => name)).toEqual(['A', 'B', 'C']);
    expect(library.cells[1]!.pins.map(({ name }) => name)).toEqual(['P']);
  });

  it('may bring the whole library, and one file several times', () => {
    const text = 'include_file (lib.inc);';
    const lib = 'library (t) { cell (A) { include_file (pins.inc); } include_file (cells.inc); }';
    const { library, problems } = readLibrary(text, { ...files, 'lib.inc': lib });
    expect(problems).toEqual([]);
    expect(library.cells.map(({ pins }) => pins.length)).toEqual([1, 1]);
  });

  it('keeps the places of what it brings', () => {
    const { problems } = readLibrary('library (t) {\n include_file (bad.inc); }', {
      'bad.inc': '\n ) \n',
    });
    expect(problems).toEqual([
      "syntax-error bad.inc:2 ')' expected the name of an attribute or group, got )",
    ]);
  });
});
