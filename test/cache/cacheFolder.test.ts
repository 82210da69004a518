import { describe, expect, it } from 'vitest';
import { cacheFolder } from '../../compiler/cache/cacheFolder.js';

describe('cacheFolder', () => {
  // XDG Base Directory Specification 0.8: XDG_CACHE_HOME, else .cache in the home folder; relative
  // paths are invalid.
  it('follows the XDG Base Directory Specification', () => {
    const folder = (environment: NodeJS.ProcessEnv) =>
      cacheFolder(environment, 'linux', '/home/user');
    expect(folder({ XDG_CACHE_HOME: '/var/cache/user' })).toBe('/var/cache/user/clockstride');
    expect(folder({})).toBe('/home/user/.cache/clockstride');
    expect(folder({ XDG_CACHE_HOME: '' })).toBe('/home/user/.cache/clockstride');
    expect(folder({ XDG_CACHE_HOME: 'here' })).toBe('/home/user/.cache/clockstride');
  });

  it('is where other systems keep caches', () => {
    expect(cacheFolder({}, 'darwin', '/Users/user')).toBe('/Users/user/Library/Caches/clockstride');
    const local = cacheFolder({ LOCALAPPDATA: '/local' }, 'win32', '/home');
    expect(local).toBe('/local/clockstride/Cache');
  });

  it('is nowhere for a user without a home', () => {
    expect(cacheFolder({}, 'linux', '')).toBeUndefined();
    expect(cacheFolder({}, 'win32', '')).toBeUndefined();
  });
});
