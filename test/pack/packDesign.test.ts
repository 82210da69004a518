import { execFileSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import { beforeAll, describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import type { Manifest } from '../../compiler/pack/manifest.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import { packageFolder, packInto } from '../support/packages.js';

const root = packageFolder();
const folder = (name: string): string => join(root, name);
const textOf = (name: string, file: string): string =>
  readFileSync(join(folder(name), file), 'utf8');
const manifestOf = (name: string): Manifest => JSON.parse(textOf(name, 'manifest.json'));
const bytesOf = (name: string): Record<string, string> =>
  Object.fromEntries(
    readdirSync(folder(name)).map((file) => [file, readFileSync(join(folder(name), file), 'hex')]),
  );

const lock = ownDesign('lock');
const counter = (step: number) => {
  const body = `reg [3:0] q = 0; always @(posedge clk) q <= q + ${step};`;
  const text = `module c(input clk, output [3:0] y); ${body} assign y = q; endmodule`;
  return designFrom(new Source('c.v', text));
};

beforeAll(() => packInto(folder('lock'), lock));

describe('a package', () => {
  it('consists of these files, and nothing is left beside it', () => {
    expect(readdirSync(folder('lock')).sort()).toEqual([
      'README.md',
      'example.mjs',
      'manifest.json',
      'model.d.mts',
      'model.d.ts',
      'model.mjs',
      'model.wasm',
      'worker.mjs',
    ]);
    expect(readdirSync(root)).toEqual(['lock']);
  });

  it('is the same to the byte when it is packed again, over the one before', async () => {
    const before = bytesOf('lock');
    await packInto(folder('lock'), ownDesign('lock'));
    expect(bytesOf('lock')).toEqual(before);
  });

  it('has a manifest with the hashes of its sources and files', () => {
    const manifest = manifestOf('lock');
    const hash = (content: Uint8Array): string =>
      createHash('sha256').update(content).digest('hex');
    expect(manifest.sources).toEqual([
      { file: 'lock.v', sha256: hash(lock.circuit.sources[0]!.bytes) },
    ]);
    const { 'manifest.json': _, ...files } = Object.fromEntries(
      readdirSync(folder('lock')).map((file) => {
        const content = readFileSync(join(folder('lock'), file));
        return [file, { bytes: content.length, sha256: hash(content) }];
      }),
    );
    expect(manifest.files).toEqual(files);
    expect(manifest.check).toMatchObject({ engine: 'reference', cycles: 10_000, seed: 1 });
    expect(manifest.resets).toEqual([{ name: 'reset', active: 1, elements: 21 }]);
  });

  it('has an example that prints what its README says', () => {
    const readme = textOf('lock', 'README.md');
    const example = textOf('lock', 'example.mjs');
    expect(readme).toContain(`\`\`\`js\n${example}\`\`\``);
    const printed = execFileSync(process.execPath, [join(folder('lock'), 'example.mjs')], {
      encoding: 'utf8',
    });
    expect(printed.length).toBeGreaterThan(100);
    expect(readme).toContain(`\`\`\`\n${printed}\`\`\``);
  });

  it('has a runtime below 12 kB that evaluates no text and imports nothing for the web', () => {
    const text = textOf('lock', 'model.mjs');
    expect(gzipSync(text).length).toBeLessThan(12_000);
    expect(text).not.toMatch(/\beval\b|\bFunction\(/);
    expect(text).not.toMatch(/\bimport\s*["']|\bfrom\s*["']|\bimport\(["']/);
  });

  it('of a netlist without inputs, state or clock runs its example too', async () => {
    const bare = "module bare(output y); assign y = 1'b1; endmodule";
    await packInto(folder('bare'), designFrom(new Source('bare.v', bare)));
    expect(textOf('bare', 'README.md')).toContain('y = 1');
    expect(textOf('bare', 'README.md')).toContain('There is no clock');
  });
});

describe('packing', () => {
  const refused = (name: string, message: string) =>
    expect(packInto(folder(name), lock)).rejects.toThrow(message);

  it('leaves a folder with other files alone', async () => {
    mkdirSync(folder('photos'));
    writeFileSync(join(folder('photos'), 'cat.jpg'), 'meow');
    await refused('photos', 'holds other files and no package');
    expect(textOf('photos', 'cat.jpg')).toBe('meow');
    expect(readdirSync(root).filter((name) => name.startsWith('.'))).toEqual([]);
  });

  it('leaves a package alone to which something was added', async () => {
    await packInto(folder('added'), counter(1));
    writeFileSync(join(folder('added'), 'notes.txt'), 'mine');
    await refused('added', 'holds notes.txt, which is no part of the package there');
    expect(textOf('added', 'notes.txt')).toBe('mine');
  });

  it('leaves a manifest alone that is not of a package', async () => {
    mkdirSync(folder('app'));
    writeFileSync(join(folder('app'), 'manifest.json'), '{"name": "my app", "files": {}}');
    await refused('app', 'holds other files and no package');
  });

  it('refuses a plain file and the folder one is in', async () => {
    writeFileSync(folder('file'), '');
    await refused('file', 'is no folder');
    await expect(packInto(process.cwd(), lock)).rejects.toThrow('is the folder you are in');
    await expect(packInto(join(process.cwd(), '..'), lock)).rejects.toThrow('one around it');
  });

  it('makes the folders around the package', async () => {
    await packInto(folder('a/b/c'), counter(1));
    expect(existsSync(join(folder('a/b/c'), 'model.mjs'))).toBe(true);
  });

  it('tells states apart by the contents of the sources, and by the clocks', async () => {
    await packInto(folder('one'), counter(1));
    await packInto(folder('two'), counter(2));
    await packInto(folder('all'), counter(1), { keepNames: 'all' });
    const timings = [{ port: 'clk', period: 4, offset: 0 }];
    const paced = designOf(counter(1).circuit, { timings });
    await packInto(folder('paced'), paced, { reading: { clock: ['clk=4'] } });
    const netlist = (name: string) => manifestOf(name).netlist;
    expect(netlist('all')).toBe(netlist('one'));
    expect(new Set(['one', 'two', 'paced'].map(netlist)).size).toBe(3);
  });

  it('adds a package.json with its name and version where it is to have one', async () => {
    await packInto(folder('named'), counter(1), {
      npmName: { name: '@works/lock', version: '2.1.0' },
    });
    const manifest = JSON.parse(textOf('named', 'package.json'));
    expect(manifest).toMatchObject({ name: '@works/lock', version: '2.1.0', type: 'module' });
    expect(manifest.files.sort()).toEqual(
      readdirSync(folder('named'))
        .filter((name) => name !== 'package.json')
        .sort(),
    );
    for (const target of Object.values<string | { default: string }>(manifest.exports)) {
      const file = typeof target === 'string' ? target : target.default;
      expect(existsSync(join(folder('named'), file)), file).toBe(true);
    }
  });
});
