import { execFileSync, spawn } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { text as streamText } from 'node:stream/consumers';
import { gunzipSync, gzipSync } from 'node:zlib';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { ReaderGone } from '../../../runtime/node/bytes/byteSink.js';
import { inputBytes } from '../../../runtime/node/bytes/inputBytes.js';
import { openSink } from '../../../runtime/node/bytes/openSink.js';

let folder = '';
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'clockstride-bytes-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

const text = Array.from({ length: 50_000 }, (_, i) => `${i},${(i * i) % 9973}\n`).join('');

async function readAll(path: string): Promise<string> {
  const pieces: Uint8Array[] = [];
  for await (const piece of inputBytes(path)) pieces.push(piece.slice());
  return Buffer.concat(pieces).toString();
}

describe('what ends in .gz', () => {
  it('is decompressed when it is read, also where it has several members', async () => {
    const path = join(folder, 't.csv.gz');
    writeFileSync(path, gzipSync(text));
    expect(await readAll(path)).toBe(text);
    writeFileSync(path, Buffer.concat([gzipSync(text.slice(0, 9)), gzipSync(text.slice(9))]));
    expect(await readAll(path)).toBe(text);
  });

  it('is refused where it is cut short or damaged', async () => {
    const path = join(folder, 't.csv.gz');
    writeFileSync(path, gzipSync(text).subarray(0, 1000));
    await expect(readAll(path)).rejects.toThrow(`${path}: the compressed data end too early`);
    writeFileSync(path, text);
    await expect(readAll(path)).rejects.toThrow(`${path}: the compressed data are damaged`);
    await expect(readAll(join(folder, 'none.gz'))).rejects.toThrow('ENOENT');
  });

  it('may be left before its end', async () => {
    const path = join(folder, 't.csv.gz');
    writeFileSync(path, gzipSync(text));
    for await (const piece of inputBytes(path)) {
      expect(piece.length).toBeGreaterThan(0);
      break;
    }
  });

  it('is compressed when it is written, from pieces that are used again', async () => {
    const path = join(folder, 't.csv.gz');
    const sink = openSink(path);
    const piece = new Uint8Array(1000);
    const bytes = new TextEncoder().encode(text);
    for (let at = 0; at < bytes.length; at += piece.length) {
      const part = bytes.subarray(at, at + piece.length);
      piece.set(part);
      await sink.write(piece.subarray(0, part.length));
      piece.fill(0);
    }
    await sink.finish();
    expect(readdirSync(folder)).toEqual([expect.stringMatching(/^\.t\.csv\.gz\.\d+\.partial$/)]);
    sink.keep();
    expect(readdirSync(folder)).toEqual(['t.csv.gz']);
    expect(gunzipSync(readFileSync(path)).toString()).toBe(text);
  });

  it('leaves nothing behind when it is discarded', async () => {
    const sink = openSink(join(folder, 't.csv.gz'));
    await sink.write(new TextEncoder().encode(text));
    sink.discard();
    expect(readdirSync(folder)).toEqual([]);
  });
});

describe('a pipe', () => {
  it('is read as it is written, and may be left while more is to come', async () => {
    const path = join(folder, 'pipe');
    execFileSync('mkfifo', [path]);
    const writer = spawn('sh', ['-c', `exec >${path}; echo one; read next; echo two`], {
      stdio: ['pipe', 'ignore', 'ignore'],
    });
    const pieces = inputBytes(path);
    expect(Buffer.from((await pieces.next()).value!).toString()).toBe('one\n');
    await pieces.return();
    writer.stdin.end('next\n');
    await new Promise((resolve) => writer.once('exit', resolve));
  });

  it('that is not read any more says so', async () => {
    const path = join(folder, 'pipe');
    execFileSync('mkfifo', [path]);
    const reader = spawn('head', ['-c', '5', path], { stdio: ['ignore', 'pipe', 'ignore'] });
    const sink = openSink(path);
    await sink.write(new TextEncoder().encode('hello'));
    expect(await streamText(reader.stdout)).toBe('hello');
    const write = async () => {
      for (let i = 0; i < 100; i++) await sink.write(new Uint8Array(10_000));
    };
    await expect(write()).rejects.toThrow(ReaderGone);
    sink.discard();
  });
});
