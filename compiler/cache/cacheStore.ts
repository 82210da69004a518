import { createHash, randomBytes } from 'node:crypto';
import { readFileSync, utimesSync } from 'node:fs';
import { readdir, rename, rm, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { makeFolder } from '../report/makeFolder.js';

/** Bytes of all entries together. */
const MOST_BYTES = 512 << 20;

/** Part of these that one entry may take. */
const LARGEST_PART = 1 / 4;

/** Part of these that is left where room has to be made. */
const KEPT_PART = 3 / 4;

/** What an unfinished file of a process that has died may be old. */
const ABANDONED_MS = 3_600_000;

/** First bytes of an entry; the SHA-256 of what follows stands behind them. */
const MAGIC = Buffer.from('clkcach1');
const HASH_BYTES = 32;

const ENTRY = /^[0-9a-f]{64}\.entry$/;
const UNFINISHED = /^[0-9a-f]{64}\.[0-9a-f]+\.partial$/;

/** How much a store may hold. */
export interface CacheLimits {
  /** Bytes of all entries together; default 512 MiB. */
  readonly mostBytes?: number;
}

/**
 * A folder of entries by key that may vanish at any time.
 *
 * Several processes can use one at once: an entry gets its name when it is complete, and one that
 * is damaged counts as none. Nothing here fails: where the folder cannot be used, nothing is found
 * and nothing is kept.
 */
export class CacheStore {
  readonly #folder: string;
  readonly #stamp: string;
  readonly #mostBytes: number;
  #waiting: (() => Promise<void>)[] = [];

  /** `stamp` tells the program that makes the entries from all others that do. */
  constructor(folder: string, stamp: string, { mostBytes = MOST_BYTES }: CacheLimits = {}) {
    this.#folder = folder;
    this.#stamp = stamp;
    this.#mostBytes = mostBytes;
  }

  /** The key of what depends on these values alone: data as in JSON, maps and typed arrays. */
  keyOf(...values: readonly unknown[]): string {
    // Entries are written in the engine's own form.
    const text = JSON.stringify([this.#stamp, process.versions.v8, ...values], plain);
    return sha256(new TextEncoder().encode(text)).toString('hex');
  }

  /** The entry of a key, undefined if there is none that is sound. */
  get(key: string): Uint8Array | undefined {
    const path = this.#pathOf(key);
    try {
      const file = readFileSync(path);
      const content = file.subarray(MAGIC.length + HASH_BYTES);
      const hash = file.subarray(MAGIC.length, MAGIC.length + HASH_BYTES);
      if (!file.subarray(0, MAGIC.length).equals(MAGIC) || !sha256(content).equals(hash)) {
        return undefined;
      }
      const now = new Date();
      utimesSync(path, now, now);
      return content;
    } catch {
      return undefined;
    }
  }

  /** Notes an entry to be kept by `flush`; `make` is called there, so that nobody waits for it. */
  later(key: string, make: () => Uint8Array | undefined): void {
    this.#waiting.push(async () => {
      const content = make();
      if (content !== undefined) await this.#write(key, content);
    });
  }

  /** Keeps what has been noted, and removes what was not used for longest where there is no room. */
  async flush(): Promise<void> {
    const waiting = this.#waiting;
    this.#waiting = [];
    if (waiting.length === 0) return;
    try {
      makeFolder(this.#folder, 0o700);
      for (const write of waiting) await write();
      await this.#makeRoom();
    } catch {
      // Another process may be making room, or the disk may be full: there is just no entry then.
    }
  }

  async #write(key: string, content: Uint8Array): Promise<void> {
    if (content.length > this.#mostBytes * LARGEST_PART) return;
    const unfinished = join(this.#folder, `${key}.${randomBytes(8).toString('hex')}.partial`);
    try {
      await writeFile(unfinished, Buffer.concat([MAGIC, sha256(content), content]));
      await rename(unfinished, this.#pathOf(key));
    } finally {
      await rm(unfinished, { force: true });
    }
  }

  async #makeRoom(): Promise<void> {
    const found = await Promise.all((await readdir(this.#folder)).map((name) => this.#look(name)));
    const files = found.filter((file) => file !== undefined);
    const now = Date.now();
    for (const { path, name, changed } of files) {
      if (UNFINISHED.test(name) && now - changed > ABANDONED_MS) await rm(path, { force: true });
    }
    const entries = files
      .filter(({ name }) => ENTRY.test(name))
      .sort((a, b) => b.changed - a.changed);
    if (entries.reduce((sum, { size }) => sum + size, 0) <= this.#mostBytes) return;
    let kept = 0;
    for (const { path, size } of entries) {
      kept += size;
      if (kept > this.#mostBytes * KEPT_PART) await rm(path, { force: true });
    }
  }

  async #look(name: string) {
    const path = join(this.#folder, name);
    try {
      const { size, mtimeMs } = await stat(path);
      return { path, name, size, changed: mtimeMs };
    } catch {
      return undefined;
    }
  }

  #pathOf(key: string): string {
    return join(this.#folder, `${key}.entry`);
  }
}

function plain(_key: string, value: unknown): unknown {
  if (value instanceof Map) return [...value];
  if (!ArrayBuffer.isView(value)) return value;
  const { buffer, byteOffset, byteLength } = value;
  return sha256(new Uint8Array(buffer, byteOffset, byteLength)).toString('hex');
}

/** The SHA-256 of bytes. */
export const sha256 = (bytes: Uint8Array): Buffer => createHash('sha256').update(bytes).digest();
