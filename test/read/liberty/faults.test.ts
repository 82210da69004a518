import { describe, expect, it } from 'vitest';
import { readLibrary } from './reading.js';

/** Problems of a library, and the cells that are read all the same. */
function reading(text: string, files: Readonly<Record<string, string>> = {}) {
  const { library, problems } = readLibrary(text, files);
  const cells = library.cells.map(
    ({ name, pins }) => `${name}(${pins.map((pin) => pin.name).join(' ')})`,
  );
  return { problems, cells };
}

/** The only problem of a library. */
function problem(text: string, files: Readonly<Record<string, string>> = {}): string {
  const { problems } = reading(text, files);
  expect(problems).toHaveLength(1);
  return problems[0]!;
}

const inLibrary = (text: string): string => `library (t) {\n${text}\ncell (Z) { }\n}`;

describe('a fault inside a statement', () => {
  it.each([
    [') foo', "')' expected the name of an attribute or group, got )"],
    ['cell { }', "'{' expected ':' or '(' after cell, got {"],
    ['bus_naming_style "x";', "'\"x\"' expected ':' or '(' after bus_naming_style, got \"x\""],
    ['bus_naming_style : ;', "'bus_naming_style' the value of bus_naming_style is missing"],
    ['area : ;', "'area' the value of area is missing"],
    ['cell (A) ;', "';' expected '{' after cell A, got ;"],
    ['type () x : 1;', "'x' expected '{' after the type group, got x"],
    ['cell (A ;', "';' expected ')', got ;"],
    ['cell () { }', "'cell ()' the cell has no name"],
    ['include_file ();', "'include_file' include_file needs the path of a file"],
    ['include_file : a.inc;', undefined],
  ])('is reported at its place: %s', (text, expected) => {
    const { problems, cells } = reading(inLibrary(text));
    expect(problems).toEqual(expected === undefined ? [] : [`syntax-error 2 ${expected}`]);
    expect(cells.at(-1)).toBe('Z()');
  });

  it('that stays open is reported where its line ends', () => {
    const text = inLibrary('cell (A) { pin (Y) { direction : input; function : "A;\n } }');
    expect(reading(text)).toEqual({
      problems: [`syntax-error 2 '"A;' the string is not closed before the end of its line`],
      cells: ['A(Y)', 'Z()'],
    });
  });

  it('is reported where another attribute follows on the line', () => {
    const text = inLibrary('cell (A) { pin (P) { direction : input capacitance : 1; } }');
    expect(reading(text)).toEqual({
      problems: ["syntax-error 2 ':' expected ';' after the value of direction, got :"],
      cells: ['A(P)', 'Z()'],
    });
  });

  it('shows the first line of a long text alone', () => {
    const text = inLibrary(`"a${'b'.repeat(50)}" x`);
    expect(problem(text)).toMatch(/after ab{39}…, got x$/);
  });
});

describe('a missing brace', () => {
  it('of a cell shows at the next cell', () => {
    const text = 'library (t) {\ncell (A) { pin (P) { }\ncell (B) { pin (P) { } }\n}';
    expect(reading(text)).toEqual({
      problems: [
        "syntax-error 3 'cell' cell cannot stand inside cell A; is a '}' missing before it?",
      ],
      cells: ['A(P)', 'B(P)'],
    });
  });

  it('of a pin shows at the next pin or state', () => {
    const text =
      'library (t) {\ncell (A) { pin (P) {\n pin (Q) {\n ff (I, J) { } }\ncell (B) { }\n}';
    const { problems, cells } = reading(text);
    expect(problems).toEqual([
      "syntax-error 3 'pin' pin cannot stand inside pin P; is a '}' missing before it?",
      "syntax-error 4 'ff' ff cannot stand inside pin Q; is a '}' missing before it?",
    ]);
    expect(cells).toEqual(['A(P Q)', 'B()']);
  });

  it('of a group that is passed over shows at the end, and the next cell is read', () => {
    const text = `library (t) {
      cell (A) { leakage_power () {{{{{ }
      }
      cell (B) { }
    }`;
    expect(reading(text)).toEqual({
      problems: [
        "syntax-error 2 'leakage_power' leakage_power is not closed; a '}' is missing before the end of the text",
      ],
      cells: ['A()', 'B()'],
    });
  });

  it('of a library shows at the end', () => {
    expect(reading('library (t) {\n cell (A) { }')).toEqual({
      problems: [
        "syntax-error 1 'library (t)' library t is not closed; a '}' is missing before the end of the text",
      ],
      cells: ['A()'],
    });
  });

  it('of several groups at the end is reported for the innermost', () => {
    expect(reading('library (t) { cell (A) {\n pin (P) { direction : input;')).toEqual({
      problems: [
        "syntax-error 2 'pin (P)' pin P is not closed; a '}' is missing before the end of the text",
      ],
      cells: ['A(P)'],
    });
  });
});

describe('a brace too many', () => {
  it('shows at the pins outside of the cell; later cells are read', () => {
    const text = 'library (t) {\ncell (A) { } pin (P) { } pin (Q) { } }\ncell (B) { }\n}';
    expect(reading(text)).toEqual({
      problems: [
        "syntax-error 2 'pin' pin stands outside of any cell; is there a '}' too many before it?",
        "syntax-error 3 'cell' cell stands outside of any library; is there a '}' too many before it?",
      ],
      cells: ['A()', 'B()'],
    });
  });

  it('at the end is reported', () => {
    expect(problem('library (t) { }\n}')).toBe(
      "syntax-error 2 '}' no group is open that this '}' could close; remove it",
    );
  });
});

describe('what has no end', () => {
  it('as a comment is reported where it begins', () => {
    expect(problem('library (t) {\n cell (A) { } /* }')).toBe(
      "syntax-error 2 '/*' the comment that begins here has no end",
    );
  });

  it('as a string is reported at the first string that goes over a line end', () => {
    const text = `library (t) {
      cell (A) { timing () { a : "x \\
        y"; b : "z; }
        c : "w"; }
      }
      cell (B) { }
    }`;
    expect(reading(text)).toEqual({
      problems: [
        `syntax-error 3 '"' a quote is missing: strings are open to the end of the text, ` +
          "and this one goes over a line end without '\\'",
      ],
      cells: ['A()', 'B()'],
    });
  });

  it('as arguments is reported at its word', () => {
    const text = 'library (t) {\n technology (cmos;\n cell (A) { }\n}';
    expect(reading(text)).toEqual({
      problems: [
        "syntax-error 2 'technology' technology is not closed; a ')' is missing before the end of the text",
      ],
      cells: ['A()'],
    });
  });
});

describe('a file', () => {
  it.each([
    ['', 'empty'],
    ['/* nothing */\n', 'only a comment'],
    [';;', 'only semicolons'],
  ])('without library is at fault (%#)', (text) => {
    expect(problem(text)).toBe("syntax-error 1 '' the file has no library group");
  });

  it('with something else outside of a library is at fault', () => {
    expect(reading('area : 1;\nmodel (m) { }\nlibrary (t) { cell (A) { } }')).toEqual({
      problems: [
        "syntax-error 1 'area' area stands outside of any library; is there a '}' too many before it?",
      ],
      cells: ['A()'],
    });
  });

  it('with too many faults is given up', () => {
    const { problems } = reading(inLibrary(')\n'.repeat(200)));
    expect(problems).toHaveLength(101);
    expect(problems.at(-1)).toBe("syntax-error 102 ')' too many problems; the rest is not read");
  });
});

describe('a file to be included', () => {
  it('that is not found is reported at its name', () => {
    expect(problem(inLibrary('include_file ("no.inc");'))).toBe(
      `file-unreadable 2 'no.inc' the included file "no.inc" is not found; name its folder with --include`,
    );
  });

  it('may not include itself without end', () => {
    const text = problem(inLibrary('include_file (self.inc);'), {
      'self.inc': 'include_file (self.inc);',
    });
    expect(text).toBe(
      `syntax-error self.inc:1 'self.inc' files are included 20 deep; does "self.inc" include itself?`,
    );
  });

  it('may not include itself again and again', () => {
    const twice = 'include_file (twice.inc); include_file (twice.inc);';
    const { problems } = reading(inLibrary('include_file (twice.inc);'), { 'twice.inc': twice });
    expect(problems.at(-1)).toMatch(/^syntax-error /);
    expect(problems.length).toBeLessThanOrEqual(101);
  });

  it('closes no group of the file that includes it', () => {
    const { problems, cells } = reading(
      'library (t) { cell (A) {\n include_file (a.inc); pin (Q) { } } }',
      { 'a.inc': 'pin (P) { } }\n cell (B) { }\n' },
    );
    expect(problems).toEqual([
      "syntax-error a.inc:1 '}' no group is open that this '}' could close; remove it",
    ]);
    expect(cells).toEqual(['A(P Q)']);
  });
});
