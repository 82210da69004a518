import { readFileSync } from 'node:fs';

/** The version in the package's own manifest. */
export function version(): string {
  // Built, this file stands one folder deeper than its source.
  const root = import.meta.url.endsWith('.ts') ? '../../' : '../../../';
  const manifest = new URL(`${root}package.json`, import.meta.url);
  return (JSON.parse(readFileSync(manifest, 'utf8')) as { version: string }).version;
}
