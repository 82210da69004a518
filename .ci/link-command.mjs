// Makes `npx clockstride` find this checkout's own command, as it finds those of dependencies.
import { chmodSync, existsSync, mkdirSync, rmSync, symlinkSync } from 'node:fs';

const command = 'dist/compiler/cli/main.js';
if (existsSync('node_modules') && existsSync(command)) {
  chmodSync(command, 0o755);
  mkdirSync('node_modules/.bin', { recursive: true });
  rmSync('node_modules/.bin/clockstride', { force: true });
  symlinkSync(`../../${command}`, 'node_modules/.bin/clockstride');
}
