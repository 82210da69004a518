import { spawnSync } from 'node:child_process';
import bundled from '@sparticuz/chromium';
import { type Browser, chromium } from 'playwright-core';

/**
 * Unpacks the Chromium of the development dependencies to the temporary folder; returns its path.
 *
 * What stands there under its name is taken for whole, so the folder must be the caller's own.
 */
export const unpackChromium = (): Promise<string> => bundled.executablePath();

/**
 * Starts a Chromium without a window. It sends everything that is not on the loopback interface
 * to `proxy`. Throws an Error that names the libraries which this machine lacks, if any, or else
 * says what Chromium said.
 */
export async function startChromium(executable: string, proxy: string): Promise<Browser> {
  const missing = missingLibraries(executable);
  if (missing.length > 0) {
    throw new Error(
      `Chromium cannot start: this machine lacks ${missing.join(', ')}; install the system ` +
        'packages that hold these shared libraries',
    );
  }
  try {
    return await chromium.launch({
      executablePath: executable,
      // The sandbox refuses to run as root, and the pages are our own.
      args: ['--no-sandbox', '--disable-gpu', `--proxy-server=${proxy}`],
    });
  } catch (error) {
    const { platform, arch } = process;
    throw new Error(`Chromium does not start here (${platform} ${arch}): ${error}`);
  }
}

/** Shared libraries that an executable needs and the dynamic loader does not find. */
function missingLibraries(executable: string): string[] {
  // ld.so(8): with this variable the loader lists what it would load, and starts nothing.
  const env = { ...process.env, LD_TRACE_LOADED_OBJECTS: '1' };
  const { stdout } = spawnSync(executable, { env, encoding: 'utf8' });
  return Array.from((stdout ?? '').matchAll(/^\s*(\S+) => not found$/gm), ([, name]) => name!);
}
