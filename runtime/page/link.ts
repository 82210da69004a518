import { fromBase64, toBase64 } from '../model/base64.js';
import type { SavedState } from '../model/savedState.js';

/** What a link to the page carries in its fragment. */
export interface LinkedView {
  readonly state: SavedState;
  /** Signals in the diagram. */
  readonly shown: readonly string[];
}

const PREFIX = '#at=';

/** A fragment for an address: the view as JSON, deflated (RFC 1951), in base64 for addresses. */
export async function fragmentOf(view: LinkedView): Promise<string> {
  const bytes = new TextEncoder().encode(JSON.stringify(view));
  const packed = await through(bytes, new CompressionStream('deflate-raw'));
  return PREFIX + toBase64(packed).replaceAll('+', '-').replaceAll('/', '_').replace(/=+$/, '');
}

/** The view in a fragment; undefined where there is none. Throws for a damaged one. */
export async function viewIn(fragment: string): Promise<LinkedView | undefined> {
  if (!fragment.startsWith(PREFIX)) return undefined;
  const text = fragment.slice(PREFIX.length).replaceAll('-', '+').replaceAll('_', '/');
  const bytes = await through(fromBase64(text), new DecompressionStream('deflate-raw'));
  return JSON.parse(new TextDecoder().decode(bytes)) as LinkedView;
}

async function through(
  bytes: Uint8Array<ArrayBuffer>,
  stream: CompressionStream | DecompressionStream,
): Promise<Uint8Array<ArrayBuffer>> {
  const piped = new Blob([bytes]).stream().pipeThrough(stream);
  return new Uint8Array(await new Response(piped).arrayBuffer());
}
