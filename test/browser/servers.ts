import { readFile } from 'node:fs/promises';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

// As strict as a page can be that compiles WebAssembly: nothing foreign, inline or evaluated.
const policy = "default-src 'none'; script-src 'self' 'wasm-unsafe-eval'; worker-src 'self'";

const html =
  '<!doctype html><title>runtime</title><script type="module" src="/page/page.mjs"></script>';

/** A server on the loopback interface. */
export interface Loopback {
  /** `http://127.0.0.1:PORT`. */
  readonly origin: string;
  /** What has been asked for so far. */
  readonly requests: readonly string[];
  close(): Promise<void>;
}

const folders = new Map([
  ['runtime', fileURLToPath(new URL('../../dist/runtime/', import.meta.url))],
  ['page', fileURLToPath(new URL('page/', import.meta.url))],
]);

/** Serves the page that runs jobs at `/`; below `/page/` its modules, `/runtime/` the built ones. */
export async function servePage(): Promise<Loopback> {
  const requests: string[] = [];
  const server = createServer(async ({ url = '' }, response) => {
    requests.push(url);
    response.setHeader('Content-Security-Policy', policy);
    if (url === '/') {
      response.setHeader('Content-Type', 'text/html').end(html);
      return;
    }
    const [, name = '', file = ''] = /^\/(\w+)\/((?:\w+\/)*\w+\.m?js)$/.exec(url) ?? [];
    const folder = folders.get(name);
    const text = folder && (await readFile(join(folder, file)).catch(() => undefined));
    if (text) response.setHeader('Content-Type', 'text/javascript').end(text);
    else response.writeHead(404).end();
  });
  return started(server, requests);
}

/**
 * A proxy that lets nothing through. A browser told to use it never asks it for what is on the
 * loopback interface, so that `requests` holds each attempt to leave that.
 */
export async function fence(): Promise<Loopback> {
  const requests: string[] = [];
  const server = createServer(({ url = '' }, response) => {
    requests.push(url);
    response.writeHead(403).end();
  });
  server.on('connect', ({ url = '' }, socket) => {
    requests.push(url);
    socket.end('HTTP/1.1 403 Forbidden\r\n\r\n');
  });
  return started(server, requests);
}

/** Starts a server on the loopback interface. */
export async function started(server: Server, requests: readonly string[]): Promise<Loopback> {
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject).listen(0, '127.0.0.1', resolve);
  });
  const { port } = server.address() as AddressInfo;
  const close = (): Promise<void> =>
    new Promise((resolve) => {
      server.close(() => resolve());
      server.closeAllConnections();
    });
  return { origin: `http://127.0.0.1:${port}`, requests, close };
}
