import { createHash } from 'node:crypto';
import { promisify } from 'node:util';
import { deflateRaw, inflateRaw } from 'node:zlib';
import type { RunPoint } from '../../runtime/engine.js';
import type { RunStart } from '../run/runRecorder.js';
import { fromJson, toJson } from './bytesInJson.js';
import { DamagedFile } from './sealedText.js';

const compress = promisify(deflateRaw);
const expand = promisify(inflateRaw);

/*
 * A checkpoint file: sixteen bytes that say what it is, then compressed (RFC 1951): the length of
 * a JSON text (four bytes, little-endian), the text, the state elements (one bit each; in
 * three-valued runs as many follow that tell which are x), the memories, and the row of the cycle
 * before. Its last 32 bytes are the SHA-256 of all before.
 */
const MAGIC = new TextEncoder().encode('clockstride-ckp1');
const HASH_BYTES = 32;

/** What a checkpoint must belong to, to be one of a record. */
export interface CheckpointContext {
  /** What tells the record from all others. */
  readonly record: string;
  readonly stateCount: number;
  readonly threeValued: boolean;
}

interface Header {
  readonly record: string;
  readonly cycle: number;
  readonly position: number;
  readonly memoryBytes: number;
  /** Words of the row of the cycle before; -1 at power-up. */
  readonly beforeWords: number;
  readonly outlets: unknown;
}

/** The bytes of a checkpoint file. What is to be written is copied before this returns first. */
export async function encodeCheckpoint(
  { cycle, point, outlets }: RunStart,
  { record, threeValued }: CheckpointContext,
): Promise<Uint8Array> {
  const header: Header = {
    record,
    cycle,
    position: point.position,
    memoryBytes: point.memory.length,
    beforeWords: point.before?.length ?? -1,
    outlets: toJson(outlets),
  };
  const text = new TextEncoder().encode(JSON.stringify(header));
  const body = Buffer.concat([
    wordBytes(Uint32Array.of(text.length)),
    text,
    ...packState(point.state, threeValued),
    point.memory,
    wordBytes(point.before ?? new Uint32Array(0)),
  ]);
  const front = Buffer.concat([MAGIC, await compress(body, { level: 1 })]);
  return Buffer.concat([front, hashOf(front)]);
}

/** The content of a checkpoint file. Throws `DamagedFile` for anything that is not whole. */
export async function decodeCheckpoint(
  name: string,
  bytes: Uint8Array,
  { record, stateCount, threeValued }: CheckpointContext,
): Promise<RunStart> {
  const end = bytes.length - HASH_BYTES;
  if (end < MAGIC.length || !isSame(bytes.subarray(0, MAGIC.length), MAGIC)) {
    throw new DamagedFile(name, 'it is no checkpoint, or not whole');
  }
  if (!isSame(hashOf(bytes.subarray(0, end)), bytes.subarray(end))) {
    throw new DamagedFile(name, 'it is not as it was written');
  }
  const body = await expand(bytes.subarray(MAGIC.length, end));
  const textEnd = 4 + body.readUInt32LE(0);
  const header = JSON.parse(body.toString('utf8', 4, textEnd)) as Header;
  if (header.record !== record) throw new DamagedFile(name, 'it belongs to another record');
  const stateBytes = Math.ceil(stateCount / 8);
  const memoryStart = textEnd + stateBytes * (threeValued ? 2 : 1);
  const memoryEnd = memoryStart + header.memoryBytes;
  const before = wordsOf(body.subarray(memoryEnd));
  const point: RunPoint = {
    state: unpackState(body.subarray(textEnd, memoryStart), stateCount, threeValued),
    memory: Uint8Array.from(body.subarray(memoryStart, memoryEnd)),
    before: header.beforeWords < 0 ? undefined : before,
    position: header.position,
  };
  return { cycle: header.cycle, point, outlets: fromJson(header.outlets) as unknown[] };
}

const hashOf = (bytes: Uint8Array): Buffer => createHash('sha256').update(bytes).digest();

const isSame = (a: Uint8Array, b: Uint8Array): boolean => Buffer.compare(a, b) === 0;

function packState(state: Uint8Array, threeValued: boolean): Uint8Array[] {
  const ones = new Uint8Array(Math.ceil(state.length / 8));
  const unknown = new Uint8Array(threeValued ? ones.length : 0);
  for (let i = 0; i < state.length; i++) {
    if (state[i] === 1) ones[i >>> 3]! |= 1 << (i & 7);
    else if (state[i] === 2) unknown[i >>> 3]! |= 1 << (i & 7);
  }
  return [ones, unknown];
}

function unpackState(bytes: Uint8Array, count: number, threeValued: boolean): Uint8Array {
  const group = Math.ceil(count / 8);
  const bit = (i: number): number => (bytes[i >>> 3]! >>> (i & 7)) & 1;
  return Uint8Array.from({ length: count }, (_, i) =>
    threeValued && bit(8 * group + i) === 1 ? 2 : bit(i),
  );
}

function wordBytes(words: Uint32Array): Uint8Array {
  const bytes = Buffer.alloc(4 * words.length);
  words.forEach((word, i) => {
    bytes.writeUInt32LE(word, 4 * i);
  });
  return bytes;
}

function wordsOf(bytes: Buffer): Uint32Array {
  return Uint32Array.from({ length: bytes.length >>> 2 }, (_, i) => bytes.readUInt32LE(4 * i));
}
