import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Command } from 'commander';
import { cacheFolder } from '../cache/cacheFolder.js';
import { CacheStore } from '../cache/cacheStore.js';
import { NetlistCache } from '../cache/netlistCache.js';
import { newestChange } from './newestChange.js';
import { version } from './version.js';

/** What `--no-cache` gives. */
export interface CacheOptions {
  readonly cache: boolean;
}

/** Adds the option that keeps a verb from using what was compiled before. */
export const addCacheOption = (command: Command): Command =>
  command.option('--no-cache', 'read and compile anew, and keep nothing for the next time');

/** The user's cache. */
export interface UserCache {
  readonly store: CacheStore;
  readonly netlists: NetlistCache;
}

/** Opens the cache in the user's own folder, unless it is not wanted or there is none. */
export function userCache({ cache }: CacheOptions): UserCache | undefined {
  const folder = cache ? cacheFolder() : undefined;
  if (folder === undefined) return undefined;
  const store = new CacheStore(folder, `${version()} ${newestChange(ownFolder())}`);
  return { store, netlists: new NetlistCache(store) };
}

// The folder of the compiler as it runs: a checkout's may have changed since the version was named.
const ownFolder = (): string => dirname(dirname(fileURLToPath(import.meta.url)));
