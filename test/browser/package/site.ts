import { readFile } from 'node:fs/promises';
import { createServer } from 'node:http';
import { extname, join } from 'node:path';
import { type Loopback, started } from '../servers.js';

// As strict as a page can be that compiles WebAssembly: nothing foreign, inline or evaluated.
const policy =
  "default-src 'none'; script-src 'self' 'wasm-unsafe-eval'; connect-src 'self'; worker-src 'self'";

const types: Readonly<Record<string, string>> = {
  '.html': 'text/html',
  '.js': 'text/javascript',
  '.mjs': 'text/javascript',
  '.wasm': 'application/wasm',
};

/** Serves folders: the file `a/b.mjs` of folder `one` at `/one/a/b.mjs`. */
export function serveFolders(folders: Readonly<Record<string, string>>): Promise<Loopback> {
  const requests: string[] = [];
  const server = createServer(async ({ url = '' }, response) => {
    requests.push(url);
    response.setHeader('Content-Security-Policy', policy);
    const [, name = '', file = ''] = /^\/([\w-]+)\/((?:[\w-]+\/)*[\w.-]+)$/.exec(url) ?? [];
    const folder = folders[name];
    const content = folder && (await readFile(join(folder, file)).catch(() => undefined));
    const type = types[extname(file)];
    if (content && type) response.setHeader('Content-Type', type).end(content);
    else response.writeHead(404).end();
  });
  return started(server, requests);
}
