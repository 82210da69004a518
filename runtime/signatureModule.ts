/** Where things stand in the memory of a signature's module; addresses in bytes. */
export const SignatureMemory = {
  /** Table k, 2048 bytes, has what each byte becomes when k more zero bytes follow it. */
  Tables: 0,
  /** The remainder so far. Like the entries of the tables its first byte is the highest one. */
  Remainder: 8 * 2048,
  Rows: 8 * 2048 + 64,
  Pages: 3,
} as const;

/** Bytes of rows that fit the memory, with room to read a word of eight bytes beyond the last one. */
export const ROOM = SignatureMemory.Pages * 65536 - SignatureMemory.Rows - 8;

/** Words of eight bytes that one step of `rows` takes at most. */
export const MOST_WORDS = 4;

/** What the module exports; both functions carry on the remainder over bytes of the memory. */
export interface SignatureExports {
  readonly memory: WebAssembly.Memory;
  /** All bytes from an address to another one, a multiple of 8 away. */
  stream(from: number, end: number): void;
  /** The first `bytes` of each `stride` bytes from an address to another one. */
  rows(from: number, end: number): void;
}

/**
 * The bytes of a WebAssembly module that divides rows of `bytes` bytes, `stride` bytes apart, by a
 * polynomial of 64 bits, up to eight bytes in a step.
 *
 * It is put together here, instruction by instruction (WebAssembly Core Specification, chapter 5), so
 * that the runtime needs no compiler. All numbers in it are below 64 unless `leb` writes them.
 */
export function signatureModule(bytes: number, stride: number): Uint8Array<ArrayBuffer> {
  const words = Array.from({ length: bytes >>> 3 }, (_, i) => step(8, 8 * i));
  const rest = bytes & 7;
  const row = [...words.flat(), ...(rest > 0 ? step(rest, bytes - rest) : [])];
  return Uint8Array.from([
    ...[0x00, 0x61, 0x73, 0x6d, 0x01, 0x00, 0x00, 0x00],
    ...section(1, [1, 0x60, 2, Type.I32, Type.I32, 0]),
    ...section(3, [2, 0, 0]),
    ...section(5, [1, 0x00, SignatureMemory.Pages]),
    ...section(7, [3, ...name('memory'), 2, 0, ...name('stream'), 0, 0, ...name('rows'), 0, 1]),
    ...section(10, [2, ...sized(body(step(8, 0), 8)), ...sized(body(row, stride))]),
  ]);
}

const Type = { I32: 0x7f, I64: 0x7e, None: 0x40 } as const;

const Op = {
  ...{ Block: 0x02, Loop: 0x03, End: 0x0b, BranchIf: 0x0d },
  ...{ Get: 0x20, Set: 0x21, Load64: 0x29, Store64: 0x37, Const32: 0x41, Const64: 0x42 },
  ...{ Less32: 0x49, GreaterOrEqual32: 0x4f, Add32: 0x6a, And32: 0x71, ShiftLeft32: 0x74 },
  ...{ And64: 0x83, Xor64: 0x85, ShiftRight64: 0x88, Wrap: 0xa7 },
} as const;

const Local = { From: 0, End: 1, Remainder: 2, Value: 3 } as const;

/** A loop over what lies between two addresses, `pace` bytes each time. */
function body(code: readonly number[], pace: number): number[] {
  const remainderAt = [...constant(SignatureMemory.Remainder)];
  return [
    ...[1, 2, Type.I64],
    ...[...remainderAt, Op.Load64, 3, 0, Op.Set, Local.Remainder],
    ...[Op.Block, Type.None, Op.Get, Local.From, Op.Get, Local.End],
    ...[Op.GreaterOrEqual32, Op.BranchIf, 0, Op.Loop, Type.None],
    ...code,
    ...[Op.Get, Local.From, ...constant(pace), Op.Add32, Op.Set, Local.From],
    ...[Op.Get, Local.From, Op.Get, Local.End, Op.Less32, Op.BranchIf, 0],
    ...[Op.End, Op.End],
    ...[...remainderAt, Op.Get, Local.Remainder, Op.Store64, 3, 0, Op.End],
  ];
}

/** Divides the `count` bytes, up to 8, that stand `offset` behind `From`. */
function step(count: number, offset: number): number[] {
  const whole = count === 8;
  const masked = [...long(-1), ...long(64 - 8 * count), Op.ShiftRight64, Op.And64];
  const code = [
    ...[Op.Get, Local.From, Op.Load64, 0, ...leb(offset), ...(whole ? [] : masked)],
    ...[Op.Get, Local.Remainder, Op.Xor64, Op.Set, Local.Value],
  ];
  for (let i = 0; i < count; i++) {
    code.push(...lookup(i, count - 1 - i));
    if (i > 0) code.push(Op.Xor64);
  }
  const kept = [Op.Get, Local.Value, ...long(8 * count), Op.ShiftRight64, Op.Xor64];
  return [...code, ...(whole ? [] : kept), Op.Set, Local.Remainder];
}

/** The entry of a table for a byte of the value. */
function lookup(byte: number, table: number): number[] {
  const shifted =
    byte === 0
      ? [Op.Get, Local.Value, Op.Wrap, ...constant(3), Op.ShiftLeft32]
      : [Op.Get, Local.Value, ...long(8 * byte - 3), Op.ShiftRight64, Op.Wrap];
  const at = SignatureMemory.Tables + 2048 * table;
  return [...shifted, ...constant(255 * 8), Op.And32, Op.Load64, 3, ...leb(at)];
}

const constant = (value: number): number[] => [Op.Const32, ...leb(value, true)];
const long = (value: number): number[] => [Op.Const64, value & 0x7f];

/** An integer from 0 on in the variable-length code of the format, LEB128. */
function leb(value: number, isSigned = false): number[] {
  const bytes: number[] = [];
  let rest = value;
  // A signed one must not end with a byte that has its sign bit set.
  while (rest >= (isSigned ? 64 : 128)) {
    bytes.push((rest & 0x7f) | 0x80);
    rest = Math.floor(rest / 128);
  }
  return [...bytes, rest];
}

const sized = (bytes: readonly number[]): number[] => [...leb(bytes.length), ...bytes];
const section = (id: number, bytes: readonly number[]): number[] => [id, ...sized(bytes)];
const name = (text: string): number[] => sized(Array.from(text, (letter) => letter.charCodeAt(0)));
