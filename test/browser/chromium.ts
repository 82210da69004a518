import { execFile, spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readFileSync, renameSync, rmSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import { type Browser, chromium } from 'playwright-core';

const modules = fileURLToPath(new URL('../../node_modules/', import.meta.url));

/**
 * Unpacks the Chromium of the development dependencies, once for all who ask; returns its path.
 *
 * It comes to its place whole, so that an unpacking which is broken off leaves no half of one.
 */
export async function unpackChromium(): Promise<string> {
  const { version } = JSON.parse(
    readFileSync(join(modules, '@sparticuz/chromium/package.json'), 'utf8'),
  ) as { version: string };
  const folder = join(modules, `.cache/chromium-${version}`);
  if (!existsSync(folder)) {
    mkdirSync(dirname(folder), { recursive: true });
    const partial = mkdtempSync(`${folder}-`);
    // It goes to the temporary folder, which is another one for a process of its own.
    const script = "await (await import('@sparticuz/chromium')).default.executablePath()";
    const env = { ...process.env, TMPDIR: partial };
    const options = { cwd: modules, env };
    await promisify(execFile)(process.execPath, ['--input-type=module', '-e', script], options);
    try {
      renameSync(partial, folder);
    } catch (error) {
      // Another one may have been faster.
      if (!existsSync(folder)) throw error;
      rmSync(partial, { recursive: true });
    }
  }
  return join(folder, 'chromium');
}

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
