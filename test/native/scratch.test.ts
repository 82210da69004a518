import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { Scratch } from '../../compiler/native/scratch.js';

const node = (script: string) => [process.execPath, '-e', script];

/** Runs `body` with a scratch directory at hand; its last act prints what the parent waits for. */
function childWithScratch(body: string) {
  const module = fileURLToPath(new URL('../../compiler/native/scratch.ts', import.meta.url));
  const script = `import { Scratch } from ${JSON.stringify(module)};
    const scratch = new Scratch();
    ${body}`;
  return spawn(process.execPath, ['--import', 'tsx', '--input-type=module', '-e', script], {
    stdio: ['ignore', 'pipe', 'inherit'],
  });
}

describe('a scratch directory', () => {
  it('is gone, with its files, when it is closed', () => {
    const scratch = new Scratch();
    writeFileSync(scratch.file('a'), 'text');
    scratch.close();
    expect(existsSync(scratch.path)).toBe(false);
  });

  it('gives back what a program in it prints, and its temporary files a place', async () => {
    const scratch = new Scratch();
    try {
      expect(await scratch.run(node('console.log(process.env.TMPDIR)'))).toBe(`${scratch.path}\n`);
    } finally {
      scratch.close();
    }
  });

  it('tells how a program failed and what it complained of', async () => {
    const scratch = new Scratch();
    try {
      const failing = scratch.run(node('console.error("no"); process.exit(3)'));
      await expect(failing).rejects.toThrow(`${process.execPath} failed with status 3:\nno`);
      await expect(scratch.run(['/nonexistent'])).rejects.toThrow(
        '/nonexistent could not be started',
      );
    } finally {
      scratch.close();
    }
  });

  it('is gone, and the programs in it ended, when a signal ends the process', async () => {
    const child = childWithScratch(`
      // The program outlives its parent unless it is ended; its own child shows that the group is.
      const script = 'const s = require("child_process").spawn("sleep", ["60"]);' +
        'require("fs").writeFileSync(process.argv[1], String(s.pid)); setInterval(() => {}, 1000)';
      const file = scratch.file('pid');
      scratch.run([process.execPath, '-e', script, file]).catch(() => {});
      const { readFileSync } = await import('node:fs');
      const waiting = setInterval(() => {
        try {
          if (readFileSync(file, 'utf8') === '') return;
          clearInterval(waiting);
          console.log(scratch.path);
        } catch {}
      }, 20);`);
    const [printed] = (await once(child.stdout!, 'data')) as [Buffer];
    const path = printed.toString().trim();
    const sleeper = Number(readFileSync(`${path}/pid`, 'utf8'));
    child.kill('SIGINT');
    const [, signal] = (await once(child, 'exit')) as [number | null, NodeJS.Signals | null];
    expect(signal).toBe('SIGINT');
    expect(existsSync(path)).toBe(false);
    await expect.poll(() => isRunning(sleeper)).toBe(false);
  });

  it('is gone when the process leaves early', async () => {
    const child = childWithScratch(
      'console.log(scratch.path); process.exitCode = 0; process.exit();',
    );
    const [printed] = (await once(child.stdout!, 'data')) as [Buffer];
    await once(child, 'exit');
    expect(existsSync(printed.toString().trim())).toBe(false);
  });
});

function isRunning(pid: number): boolean {
  try {
    // A process that has ended but that nobody has waited for counts as ended.
    return !/\) Z/.test(readFileSync(`/proc/${pid}/stat`, 'utf8'));
  } catch {
    return false;
  }
}
