import { fromBase64 } from './base64.js';
import { identity } from './identity.js';
import { nodeModule } from './nodeModule.js';
import { sha256 } from './sha256.js';
import { shown } from './values.js';

/** Where `model.wasm` comes from: an address, its bytes, a response, or a compiled module. */
export type ModelSource = string | URL | BufferSource | Response | WebAssembly.Module;

/** The module of this package, where it lies beside `model.mjs`. */
export const packagedModule = (): URL => new URL('./model.wasm', import.meta.url);

/**
 * Compiles the module from where it is. With `verify`, its bytes must have the SHA-256 that this
 * package was written with. Throws TypeError for what is no module, RangeError for a wrong hash.
 */
export async function compiled(
  source: ModelSource | Promise<ModelSource>,
  verify: boolean,
): Promise<WebAssembly.Module> {
  const given = await source;
  if (given instanceof WebAssembly.Module) {
    if (!verify) return given;
    throw new TypeError('expected an address or bytes to verify, got a compiled module');
  }
  const found = given instanceof URL || typeof given === 'string' ? await opened(given) : given;
  if (found instanceof Response) {
    const isWasm = found.headers.get('content-type')?.startsWith('application/wasm');
    if (isWasm && !verify) return WebAssembly.compileStreaming(found);
    return checked(await found.arrayBuffer(), verify);
  }
  if (found instanceof ArrayBuffer || ArrayBuffer.isView(found)) return checked(found, verify);
  throw new TypeError(`expected an address, bytes or a module, got ${shown(found)}`);
}

/** Compiles the module once, for several instances or for a worker. */
export const compile = (
  source: ModelSource | Promise<ModelSource> = packagedModule(),
  { verify = false }: { readonly verify?: boolean } = {},
): Promise<WebAssembly.Module> => compiled(source, verify);

async function checked(source: BufferSource, verify: boolean): Promise<WebAssembly.Module> {
  if (verify) {
    const bytes = ArrayBuffer.isView(source)
      ? new Uint8Array(source.buffer, source.byteOffset, source.byteLength)
      : new Uint8Array(source);
    const got = sha256(bytes);
    if (got !== identity.sha256) {
      throw new RangeError(`expected a module with SHA-256 ${identity.sha256}, got ${got}`);
    }
  }
  return WebAssembly.compile(source);
}

/** What is used of a module of Node, whose types pages need not have. */
interface NodeFiles {
  readFile(path: URL): Promise<Uint8Array<ArrayBuffer>>;
}

function absolute(address: string | URL): URL {
  try {
    return new URL(address, globalThis.location?.href);
  } catch {
    throw new TypeError(`expected a URL, such as one from import.meta.url, got ${shown(address)}`);
  }
}

async function opened(address: string | URL): Promise<Response | BufferSource> {
  const { href, protocol } = absolute(address);
  if (protocol === 'file:' && globalThis.process?.versions?.node) {
    const { readFile } = await nodeModule<NodeFiles>('fs/promises');
    return readFile(new URL(href));
  }
  // Bundlers put small files into the address; a policy may keep `fetch` from that.
  const inline = /^data:[^,]*;base64,(.*)$/s.exec(href);
  if (inline) return fromBase64(inline[1]!);
  const response = await fetch(href);
  if (response.ok) return response;
  throw new TypeError(`expected a module at ${href}, got status ${response.status}`);
}
