import {
  existsSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  utimesSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { CacheStore } from '../../compiler/cache/cacheStore.js';

const above = mkdtempSync(join(tmpdir(), 'clockstride-store-'));
afterAll(() => rmSync(above, { recursive: true }));

let folders = 0;
const newFolder = (): string => join(above, String(folders++), 'below');

const bytes = (length: number, fill: number): Uint8Array => new Uint8Array(length).fill(fill);

async function keep(store: CacheStore, name: string, content: Uint8Array): Promise<string> {
  const key = store.keyOf(name);
  store.later(key, () => content);
  await store.flush();
  return key;
}

describe('CacheStore', () => {
  it('finds what it has kept, also for another process', async () => {
    const folder = newFolder();
    const key = await keep(new CacheStore(folder, '1'), 'a', bytes(1000, 7));
    const other = new CacheStore(folder, '1');
    expect(other.keyOf('a')).toBe(key);
    expect(Uint8Array.from(other.get(key)!)).toEqual(bytes(1000, 7));
    expect(other.get(other.keyOf('b'))).toBeUndefined();
  });

  it('makes an entry only when it is told to write', async () => {
    const store = new CacheStore(newFolder(), '1');
    let made = 0;
    store.later(store.keyOf('a'), () => {
      made++;
      return undefined;
    });
    expect(made).toBe(0);
    await store.flush();
    await store.flush();
    expect(made).toBe(1);
    expect(store.get(store.keyOf('a'))).toBeUndefined();
  });

  it('tells programs and values apart by the key', () => {
    const store = new CacheStore(newFolder(), '1');
    const values = [
      [],
      ['a'],
      ['a', 'b'],
      [['a', 'b']],
      [1],
      ['1'],
      [Uint8Array.of(1)],
      [Uint8Array.of(2)],
      [{ a: Uint8Array.of(1) }],
      [new Map([['a', 'b']])],
      [new Map([['a', 'c']])],
      [undefined],
    ];
    const keys = values.map((value) => store.keyOf(...value));
    keys.push(new CacheStore(newFolder(), '2').keyOf());
    expect(new Set(keys).size).toBe(keys.length);
    expect(store.keyOf(Uint32Array.of(1, 2).subarray(1))).toBe(store.keyOf(Uint32Array.of(2)));
  });

  // A recursive mkdir of Node 20 never returns there.
  it.runIf(existsSync('/proc/self'))('keeps nothing where no folder can be made', async () => {
    const store = new CacheStore('/proc/.cache/clockstride', '1');
    expect(store.get(await keep(store, 'a', bytes(10, 1)))).toBeUndefined();
  });

  it('finds nothing in a damaged entry', async () => {
    const folder = newFolder();
    const store = new CacheStore(folder, '1');
    const key = await keep(store, 'a', bytes(20, 1));
    const [name] = readdirSync(folder);
    const path = join(folder, name!);
    const whole = readFileSync(path);
    for (let at = 0; at < whole.length; at++) {
      const damaged = Buffer.from(whole);
      damaged[at]! ^= 0x10;
      writeFileSync(path, damaged);
      expect(store.get(key), `byte ${at}`).toBeUndefined();
      writeFileSync(path, whole.subarray(0, at));
      expect(store.get(key), `first ${at} bytes`).toBeUndefined();
    }
    writeFileSync(path, whole);
    expect(store.get(key)).toBeDefined();
  });

  it('is used by many at once', async () => {
    const folder = newFolder();
    const stores = Array.from({ length: 8 }, () => new CacheStore(folder, '1'));
    await Promise.all(stores.map((store) => keep(store, 'same', bytes(50_000, 3))));
    for (const store of stores) {
      expect(Uint8Array.from(store.get(store.keyOf('same'))!)).toEqual(bytes(50_000, 3));
    }
    expect(readdirSync(folder)).toHaveLength(1);
  });

  it('removes what was not used for longest where there is no room', async () => {
    const folder = newFolder();
    const store = new CacheStore(folder, '1', { mostBytes: 10_000 });
    const keys: string[] = [];
    for (let i = 0; i < 8; i++) {
      keys.push(await keep(store, `entry ${i}`, bytes(1100, i)));
      const then = new Date(Date.now() - 1_000_000 + i * 1000);
      utimesSync(join(folder, `${keys[i]}.entry`), then, then);
    }
    expect(readdirSync(folder)).toHaveLength(8);
    expect(store.get(keys[0]!)).toBeDefined();
    await keep(store, 'last', bytes(2000, 9));
    const left = keys.map((key) => existsSync(join(folder, `${key}.entry`)));
    expect(left).toEqual([true, false, false, false, false, true, true, true]);
  });

  it('leaves out an entry that would take the room of many', async () => {
    const store = new CacheStore(newFolder(), '1', { mostBytes: 1000 });
    const key = await keep(store, 'large', bytes(300, 1));
    expect(store.get(key)).toBeUndefined();
  });

  it('removes unfinished files that nobody works on, and no files of others', async () => {
    const folder = newFolder();
    const store = new CacheStore(folder, '1', { mostBytes: 10 });
    await keep(store, 'large', bytes(10, 1));
    const name = (letter: string) => `${letter.repeat(64)}.0123.partial`;
    const old = new Date(Date.now() - 7_200_000);
    for (const file of [name('a'), name('b'), 'notes.txt']) writeFileSync(join(folder, file), 'x');
    for (const file of [name('a'), 'notes.txt']) utimesSync(join(folder, file), old, old);
    await keep(store, 'a', bytes(1, 1));
    expect(readdirSync(folder).sort()).toEqual([name('b'), 'notes.txt']);
  });

  it('does without a folder that cannot be used', async () => {
    const file = join(above, 'file');
    writeFileSync(file, '');
    const store = new CacheStore(join(file, 'below'), '1');
    const key = await keep(store, 'a', bytes(1, 1));
    expect(store.get(key)).toBeUndefined();
  });
});
