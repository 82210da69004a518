import { readFileSync } from 'node:fs';
import type { PackageIdentity } from '../../runtime/model/identity.js';

/** A text that `npm run build` has put into `dist/package/`. */
export function bundledText(name: string): string {
  const folder = import.meta.url.endsWith('.ts') ? '../../dist/package/' : '../../package/';
  return readFileSync(new URL(`${folder}${name}`, import.meta.url), 'utf8');
}

/** The text of `model.mjs`. */
export function modelModule(identity: PackageIdentity, version: string): string {
  return `${head(identity.name, version)}
const CLOCKSTRIDE_PACKAGE = ${JSON.stringify(identity)};
${bundledText(identity.lanes === 1 ? 'model.js' : 'lanes.js')}`;
}

/** The text of `worker.mjs`. */
export function workerModule({ name }: PackageIdentity, version: string): string {
  return `${head(name, version)}\n${bundledText('worker.js')}`;
}

// A line end of JavaScript would end the comment.
const head = (name: string, version: string): string =>
  `// ${name.replace(/[\r\n\u2028\u2029]/g, ' ')}, packed by clockstride ${version}. model.d.ts describes it.`;
