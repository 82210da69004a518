import { describe, expect, it } from 'vitest';
import { circles, filesBelow, type Import, importsOf, textOf } from './sources.js';

const files = [...filesBelow('compiler'), ...filesBelow('runtime')];
const imports = files.flatMap(importsOf);

/** The imports for which a rule does not hold, written `FILE imports TARGET`. */
const breaches = (isBreach: (found: Import) => boolean): string[] =>
  imports.filter(isBreach).map(({ from, to }) => `${from} imports ${to}`);

const isIn = (path: string, folder: string): boolean => path.startsWith(`${folder}/`);

/** The folder of the compiler in which a file stands, else the file itself. */
const partOf = (file: string): string => /^compiler\/\w+(?=\/)/.exec(file)?.[0] ?? file;

// What each stage may take from the rest of the compiler: never anything of another stage.
const sources: Readonly<Record<string, readonly string[]>> = {
  read: ['circuit', 'diagnostics'],
  passes: ['circuit', 'logic', 'program'],
  emit: ['logic', 'program'],
  interpret: ['circuit', 'logic', 'program'],
};

describe('imports', () => {
  it('do not run in a circle', () => {
    expect(circles(imports.filter(({ isType }) => !isType))).toEqual([]);
  });

  it('do not run in a circle even where they are only of types', () => {
    expect(circles(imports)).toEqual([]);
  });

  it('go one way between the folders of the compiler', () => {
    const between = imports
      .map(({ from, to }) => ({ from: partOf(from), to: partOf(to) }))
      .filter(({ from, to }) => from !== to);
    expect(circles(between)).toEqual([]);
  });

  it.each(Object.entries(sources))('keep %s apart from the other stages', (stage, allowed) => {
    const folder = `compiler/${stage}`;
    const isAllowed = (to: string): boolean =>
      [stage, ...allowed].some((name) => isIn(to, `compiler/${name}`));
    expect(
      breaches(({ from, to }) => isIn(from, folder) && isIn(to, 'compiler') && !isAllowed(to)),
    ).toEqual([]);
  });

  it('never lead from the runtime to the compiler', () => {
    expect(breaches(({ from, to }) => isIn(from, 'runtime') && isIn(to, 'compiler'))).toEqual([]);
  });

  it('keep the runtime outside node/ free of Node and of packages', () => {
    const isForAll = (path: string): boolean =>
      isIn(path, 'runtime') && !isIn(path, 'runtime/node');
    expect(breaches(({ from, to }) => isForAll(from) && !isForAll(to))).toEqual([]);
  });

  it('leave Binaryen to emission; others take its types alone', () => {
    const uses = imports.filter(({ to, isType }) => to === 'binaryen' && !isType);
    expect(uses.length).toBeGreaterThan(0);
    expect(uses.filter(({ from }) => !isIn(from, 'compiler/emit'))).toEqual([]);
  });
});

describe('source files', () => {
  it('have at most 400 lines', () => {
    const lines = (file: string): number => textOf(file).split('\n').length - 1;
    expect(files.filter((file) => lines(file) > 400)).toEqual([]);
  });
});
