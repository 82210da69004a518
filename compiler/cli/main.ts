#!/usr/bin/env node
import { existsSync, statSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import { newestChange } from './newestChange.js';

// One file starts sooner than some hundred modules, so a build joins them. In a checkout they may
// have been built again since; what has been installed never changes.
const joined = fileURLToPath(new URL('../../joined/command/command.js', import.meta.url));
const modules = dirname(dirname(dirname(joined)));

function isUpToDate(): boolean {
  if (!existsSync(joined)) return false;
  const isInstalled = !existsSync(`${dirname(modules)}/tsconfig.json`);
  const built = statSync(joined).mtimeMs;
  return (
    isInstalled ||
    ['compiler', 'runtime'].every((part) => newestChange(`${modules}/${part}`) <= built)
  );
}

const { main } = await import(isUpToDate() ? joined : './command.js');
await main();
