import { multiply256 } from './galois.js';
import { mux, tree, zip } from './logic.js';
import { Module } from './netlistWriter.js';
import type { Bit, Bus } from './nets.js';
import { sbox } from './sbox.js';
import { matrixOf, xorNetwork } from './xorNetwork.js';

/**
 * AES-128 encryption (FIPS 197), one round a cycle, as `aes128` with inputs `clk`, `start`,
 * `key[127:0]`, `plaintext[127:0]` and outputs `ciphertext[127:0]`, `done`, `busy`. Bit 127 is
 * the first bit of the standard's first byte. `start` takes key and plaintext; the ciphertext
 * stands 11 cycles later, where `done` is 1 for one cycle, and holds until the next start.
 *
 * With several cores each one's ciphertext is the plaintext of the next and its `done` starts
 * the next, so that the last gives the plaintext encrypted `cores` times, 11 cycles a core, under
 * a key that must hold meanwhile; `busy` is 1 while any core works. About 5,200 gates a core.
 */
export function aes128(cores: number): Module {
  const core = aesCore();
  const m = new Module('aes128');
  const clk = m.input('clk');
  let start = m.input('start');
  const key = m.inputs('key', 128);
  let text = m.inputs('plaintext', 128);
  const busy: Bit[] = [];
  for (let i = 0; i < cores; i++) {
    const outputs = m.instance<'ciphertext' | 'done' | 'busy'>(core, `core_${i}`, {
      clk,
      start,
      key,
      plaintext: text,
    });
    text = outputs.ciphertext;
    start = outputs.done[0]!;
    busy.push(outputs.busy[0]!);
  }
  m.output('ciphertext', text);
  m.output('done', start);
  m.output('busy', tree(m, 'or', busy));
  return m;
}

/**
 * One column of an AES round, as `aes_column` with inputs `clk`, `key[31:0]`, `x[31:0]` and output
 * `y[31:0]`: it substitutes the four bytes, mixes them (FIPS 197, sections 5.1.1 and 5.1.3), adds
 * the key and holds the sum in registers. About 700 gates, less than any core.
 */
export function aesColumn(): Module {
  const substitute = sbox();
  const m = new Module('aes_column');
  const clock = m.input('clk');
  const key = m.inputs('key', 32);
  const x = m.inputs('x', 32);
  const bytes = [0, 1, 2, 3].map(
    (i) => m.instance<'y'>(substitute, `sbox_${i}`, { x: byteOf(x, i) }).y,
  );
  const mixed = m.instance<'y'>(mixColumn(), 'mix', { x: joinBytes(bytes) });
  const column = m.wires('column', 32);
  m.flipFlops(column, zip(m, 'xor', mixed.y, key), { clock });
  m.output('y', column);
  return m;
}

function aesCore(): Module {
  const substitute = sbox();
  const m = new Module('aes_core');
  const clk = m.input('clk');
  const start = m.input('start');
  const key = m.inputs('key', 128);
  const plaintext = m.inputs('plaintext', 128);
  const state = m.wires('state', 128);
  const roundKey = m.wires('round_key', 128);
  const roundConstant = m.wires('round_constant', 8);
  const busy = m.wires('busy', 1);
  const done = m.wires('done', 1);

  // 0x36 is the last of the ten round constants, and the only one with bits 1 and 5.
  const last = m.named('last', m.and(busy[0]!, roundConstant[1]!, roundConstant[5]!));
  const { next: nextKey } = m.instance<'next'>(keyStep(substitute), 'key_step', {
    key: roundKey,
    round_constant: roundConstant,
  });
  const { next: nextState } = m.instance<'next'>(round(substitute), 'round', {
    state,
    round_key: nextKey,
    last,
  });

  const enable = m.named('step', m.or(start, busy[0]!));
  const whitened = zip(m, 'xor', plaintext, key);
  m.flipFlops(state, mux(m, start, nextState, whitened), { clock: clk, enable });
  m.flipFlops(roundKey, mux(m, start, nextKey, key), { clock: clk, enable });
  m.flipFlops(roundConstant, nextRoundConstant(m, start, roundConstant), { clock: clk, enable });
  const running = m.and(busy[0]!, m.not(last));
  m.flipFlops(busy, [m.or(start, running)], { clock: clk, value: 0n });
  m.flipFlops(done, [m.and(last, m.not(start))], { clock: clk, value: 0n });
  m.output('ciphertext', state);
  m.output('done', done);
  m.output('busy', busy);
  return m;
}

// The constant doubles in GF(2^8) each round; a start sets it to 1.
function nextRoundConstant(m: Module, start: Bit, constant: Bus): Bus {
  const running = m.not(start);
  const doubled = xorNetwork(
    m,
    matrixOf((x) => multiply256(x, 2), 8, 8),
    constant,
  );
  return doubled.map((bit, i) => (i === 0 ? m.or(bit, start) : m.and(bit, running)));
}

// FIPS 197, section 5.2, one round key from the one before.
function keyStep(substitute: Module): Module {
  const m = new Module('key_step');
  const key = m.inputs('key', 128);
  const constant = m.inputs('round_constant', 8);
  const words = [0, 1, 2, 3].map((i) => key.slice(96 - 32 * i, 128 - 32 * i));
  const bytes = [0, 1, 2, 3].map((i) => {
    const x = byteOf(words[3]!, (i + 1) % 4);
    return m.instance<'y'>(substitute, `sbox_${i}`, { x }).y;
  });
  bytes[0] = zip(m, 'xor', bytes[0]!, constant);
  let carried = joinBytes(bytes);
  const next = words.map((word) => {
    carried = zip(m, 'xor', word, carried);
    return carried;
  });
  m.output('next', joinBytes(next));
  return m;
}

// FIPS 197, section 5.1: SubBytes, ShiftRows, MixColumns but in the last round, AddRoundKey.
function round(substitute: Module): Module {
  const mix = mixColumn();
  const m = new Module('round');
  const state = m.inputs('state', 128);
  const roundKey = m.inputs('round_key', 128);
  const last = m.input('last');
  const bytes = Array.from(
    { length: 16 },
    (_, i) => m.instance<'y'>(substitute, `sbox_${i}`, { x: byteOf(state, i) }).y,
  );
  const shifted = bytes.map((_, i) => bytes[(i + 4 * (i % 4)) % 16]!);
  const columns = [0, 1, 2, 3].map((i) => {
    const x = joinBytes(shifted.slice(4 * i, 4 * i + 4));
    return m.instance<'y'>(mix, `mix_column_${i}`, { x }).y;
  });
  const chosen = mux(m, last, joinBytes(columns), joinBytes(shifted));
  m.output('next', zip(m, 'xor', chosen, roundKey));
  return m;
}

function mixColumn(): Module {
  const m = new Module('mix_column');
  const x = m.inputs('x', 32);
  const mix = (column: number): number => {
    const byte = (i: number) => (column >>> (24 - 8 * (i % 4))) & 0xff;
    return [0, 1, 2, 3].reduce((mixed, i) => {
      const own = multiply256(byte(i), 2) ^ multiply256(byte(i + 1), 3);
      return (mixed << 8) | (own ^ byte(i + 2) ^ byte(i + 3));
    }, 0);
  };
  m.output('y', xorNetwork(m, matrixOf(mix, 32, 32), x));
  return m;
}

// Byte 0 is the most significant, as the standard writes.
function byteOf(bus: Bus, i: number): Bus {
  return bus.slice(bus.length - 8 * i - 8, bus.length - 8 * i);
}

function joinBytes(parts: readonly Bus[]): Bus {
  return parts.toReversed().flat();
}
