import { homedir } from 'node:os';
import { isAbsolute, join } from 'node:path';

/**
 * The folder in which the command keeps what it may need again: `clockstride` in `XDG_CACHE_HOME`
 * or else in `~/.cache` (XDG Base Directory Specification 0.8), in `~/Library/Caches` on macOS,
 * `clockstride\Cache` in `LOCALAPPDATA` on Windows. Undefined where there is no such place.
 */
export function cacheFolder(
  environment: NodeJS.ProcessEnv = process.env,
  platform: NodeJS.Platform = process.platform,
  home: string = homedir(),
): string | undefined {
  const { XDG_CACHE_HOME: xdg = '', LOCALAPPDATA: local = '' } = environment;
  // The specification wants relative paths ignored.
  if (isAbsolute(xdg)) return join(xdg, 'clockstride');
  if (platform === 'win32') return local === '' ? undefined : join(local, 'clockstride', 'Cache');
  if (!isAbsolute(home)) return undefined;
  return platform === 'darwin'
    ? join(home, 'Library', 'Caches', 'clockstride')
    : join(home, '.cache', 'clockstride');
}
