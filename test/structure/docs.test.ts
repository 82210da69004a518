import { describe, expect, it } from 'vitest';
import { codeTable, type DiagnosticCode } from '../../compiler/diagnostics/codes.js';
import { exportsOf, isDocumented } from './exports.js';
import { filesBelow, textOf } from './sources.js';

describe('the public names', () => {
  it.each(['compiler/index.ts', 'runtime/index.ts', 'runtime/node/index.ts'])(
    'of %s have a doc comment where they are defined',
    (face) => {
      const exported = exportsOf(face);
      expect(exported.length).toBeGreaterThan(0);
      expect(exported.filter((found) => !isDocumented(found))).toEqual([]);
    },
  );
});

// Exempt: codes that no test names.
const untested: readonly string[] = ['cell-shadowed'];

describe('diagnostic codes', () => {
  const codes = Object.keys(codeTable) as DiagnosticCode[];

  it('are reported somewhere in the compiler', () => {
    expect(unmentioned(codes, 'compiler', 'compiler/diagnostics/codes.ts')).toEqual([]);
  });

  it('stand in the README with cause and cure', () => {
    const readme = textOf('README.md');
    const rows = codes.map((code) => {
      const { severity, cause, cure } = codeTable[code];
      return `| \`${code}\` | ${severity} | ${cause} | ${cure} |`;
    });
    expect(readme).toContain(rows.join('\n'));
  });

  it('are expected by some test', () => {
    const checked = codes.filter((code) => !untested.includes(code));
    expect(unmentioned(checked, 'test', 'test/structure/docs.test.ts')).toEqual([]);
  });
});

/** The codes that no file of a folder but the one left out contains. */
function unmentioned(
  codes: readonly DiagnosticCode[],
  folder: string,
  leftOut: string,
): DiagnosticCode[] {
  const texts = filesBelow(folder)
    .filter((file) => file !== leftOut)
    .map(textOf);
  // `top-unknown` does not stand in `stop-unknown-levels`.
  return codes.filter((code) => {
    const word = new RegExp(`(?<![\\w-])${code}(?![\\w-])`);
    return !texts.some((text) => word.test(text));
  });
}
