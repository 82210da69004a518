import {
  existsSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  symlinkSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { ModelLayout } from '../../../runtime/layout.js';
import { ResponseTable } from '../../../runtime/node/responseTable.js';
import { ResponseWriter } from '../../../runtime/node/responseWriter.js';
import type { ResponseBlock } from '../../../runtime/stream.js';
import { packRows } from '../../support/rows.js';
import { layoutOf } from '../../support/tables.js';

const block = (
  layout: ModelLayout,
  firstCycle: number,
  rows: readonly string[],
): ResponseBlock => ({
  firstCycle,
  cycles: rows.length,
  rows: packRows(layout, layout.outputs, rows),
});

function textOf(layout: ModelLayout, ...blocks: ResponseBlock[]): string {
  const table = new ResponseTable(layout);
  const decode = (bytes: Uint8Array) => new TextDecoder().decode(bytes);
  let text = decode(table.header());
  for (const each of blocks) for (const piece of table.rows(each)) text += decode(piece);
  return text;
}

const two = layoutOf([], ['y', 'v[6:0]', 'b[3:3]']);

describe('ResponseTable', () => {
  it('writes the cycle and the ports in declaration order', () => {
    const blocks = [
      block(two, 0, ['1 0001111 0', '0 1000000 1']),
      block(two, 9, ['0 0000000 0', '1 1111111 1']),
    ];
    expect(textOf(two, ...blocks)).toBe(
      'cycle,y,v,b\n0,1,0x0f,0\n1,0,0x40,1\n9,0,0x00,0\n10,1,0x7f,1\n',
    );
  });

  it('writes x as a bit, and a vector with an x in binary', () => {
    const layout = layoutOf([], ['y', 'v[6:0]'], { threeValued: true });
    const rows = ['x 0001111', '1 00x1111', '0 xxxxxxx'];
    expect(textOf(layout, block(layout, 0, rows))).toBe(
      'cycle,y,v\n0,x,0x0f\n1,1,0b00x1111\n2,0,0bxxxxxxx\n',
    );
  });

  it('quotes a name that has a comma or a quote in it', () => {
    const layout = { ...two, outputs: { ...two.outputs, ports: two.outputs.ports.slice(0, 1) } };
    const named = { ...layout.outputs.ports[0]!, name: 'a,"b"' };
    expect(textOf({ ...layout, outputs: { ...layout.outputs, ports: [named] } })).toBe(
      'cycle,"a,""b"""\n',
    );
  });

  it('writes the cycle alone where there is no output', () => {
    const none = layoutOf([], []);
    expect(textOf(none, { firstCycle: 0, cycles: 2, rows: new Uint32Array(0) })).toBe(
      'cycle\n0\n1\n',
    );
  });

  it('writes long blocks in pieces and cycle numbers beyond 32 bits', () => {
    const rows = Array<string>(30_000).fill('1 0000001 0');
    const first = 4_294_967_290;
    const lines = textOf(two, block(two, first, rows))
      .trimEnd()
      .split('\n')
      .slice(1);
    expect(lines).toHaveLength(30_000);
    expect(lines[0]).toBe('4294967290,1,0x01,0');
    expect(lines.every((line, i) => line === `${first + i},1,0x01,0`)).toBe(true);
  });
});

describe('ResponseWriter', () => {
  let folder = '';
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'response-'));
  });
  afterEach(() => {
    rmSync(folder, { recursive: true });
  });

  it('shows the file under its name only once it is kept', async () => {
    const path = join(folder, 'r.csv');
    const writer = new ResponseWriter(path, two);
    await writer.write(block(two, 0, ['1 0000000 0']));
    expect(existsSync(path)).toBe(false);
    await writer.finish();
    writer.keep();
    expect(readFileSync(path, 'utf8')).toBe('cycle,y,v,b\n0,1,0x00,0\n');
    expect(readdirSync(folder)).toEqual(['r.csv']);
  });

  it('leaves an older file alone and nothing else behind when it is discarded', async () => {
    const path = join(folder, 'r.csv');
    writeFileSync(path, 'old');
    const writer = new ResponseWriter(path, two);
    await writer.write(block(two, 0, ['1 0000000 0']));
    writer.discard();
    writer.discard();
    expect(readFileSync(path, 'utf8')).toBe('old');
    expect(readdirSync(folder)).toEqual(['r.csv']);
    await expect(writer.write(block(two, 1, ['1 0000000 0']))).rejects.toThrow(RangeError);
  });

  it('replaces what a symbolic link points to, not the link', async () => {
    const path = join(folder, 'r.csv');
    const link = join(folder, 'link.csv');
    writeFileSync(path, 'old');
    symlinkSync(path, link);
    const writer = new ResponseWriter(link, two);
    await writer.finish();
    writer.keep();
    expect(readFileSync(path, 'utf8')).toBe('cycle,y,v,b\n');
    expect(readFileSync(link, 'utf8')).toBe('cycle,y,v,b\n');
  });

  it('writes directly to what is no plain file', async () => {
    const writer = new ResponseWriter('/dev/null', two);
    await writer.write(block(two, 0, ['1 0000000 0']));
    await writer.finish();
    writer.keep();
    expect(existsSync('/dev/null')).toBe(true);
  });

  it('throws what the file system throws', () => {
    expect(() => new ResponseWriter(join(folder, 'none', 'r.csv'), two)).toThrow('ENOENT');
  });
});
