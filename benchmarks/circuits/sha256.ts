import { add, equals, increment, mux, muxConstant, tree } from './logic.js';
import { Module } from './netlistWriter.js';
import type { Bus } from './nets.js';

/**
 * The compression function of SHA-256 (FIPS 180-4, section 6.2), one round a cycle, as `sha256`
 * with inputs `clk`, `start`, `first`, `block[511:0]` and outputs `digest[255:0]`, `done`,
 * `busy`. Bit 511 is the first bit of the padded block. `start` takes the block, and with
 * `first` begins from the initial hash value, else from the present digest; the new digest
 * stands 66 cycles later, where `done` is 1 for one cycle.
 */
export function sha256(): Module {
  const m = new Module('sha256');
  const clk = m.input('clk');
  const start = m.input('start');
  const first = m.input('first');
  const block = m.inputs('block', 512);
  const hash = m.wires('hash', 256);
  const working = m.wires('working', 256);
  const schedule = m.wires('schedule', 512);
  const count = m.wires('count', 7);
  const busy = m.wires('busy', 1);
  const done = m.wires('done', 1);

  // Rounds have the counts 0 to 63; at 64 the working variables join the hash.
  const last = m.named('last', m.and(busy[0]!, count[6]!));
  const { k } = m.instance<'k'>(roundConstants(), 'constants', { round: count.slice(0, 6) });
  const { next } = m.instance<'next'>(round(), 'round', {
    working,
    k,
    w: schedule.slice(480, 512),
  });
  const { next: newWord } = m.instance<'next'>(messageWord(), 'message', { schedule });
  const { sum } = m.instance<'sum'>(finalSum(), 'final_sum', { hash, working });

  const begin = muxConstant(m, first, hash, initialHash());
  const step = m.named('step', m.or(start, busy[0]!));
  const shifted = [...newWord, ...schedule.slice(0, 480)];
  const hashStep = m.named('hash_step', m.or(start, last));
  m.flipFlops(hash, mux(m, start, sum, begin), { clock: clk, enable: hashStep });
  m.flipFlops(working, mux(m, start, next, begin), { clock: clk, enable: step });
  m.flipFlops(schedule, mux(m, start, shifted, block), { clock: clk, enable: step });
  const idle = m.not(start);
  const counted = increment(m, count).map((bit) => m.and(bit, idle));
  m.flipFlops(count, counted, { clock: clk, enable: step });
  const running = m.and(busy[0]!, m.not(last));
  m.flipFlops(busy, [m.or(start, running)], { clock: clk, value: 0n });
  m.flipFlops(done, [m.and(last, idle)], { clock: clk, value: 0n });
  m.output('digest', hash);
  m.output('done', done);
  m.output('busy', busy);
  return m;
}

// Section 6.2.2, step 3; `working` is a, b, ... h from the most significant word down.
function round(): Module {
  const m = new Module('sha256_round');
  const working = m.inputs('working', 256);
  const k = m.inputs('k', 32);
  const w = m.inputs('w', 32);
  const [a, b, c, d, e, f, g, h] = wordsOf(working) as [Bus, Bus, Bus, Bus, Bus, Bus, Bus, Bus];
  const choice = e.map((bit, i) => m.xor(g[i]!, m.and(bit, m.xor(f[i]!, g[i]!))));
  const majority = a.map((bit, i) => m.or(m.and(bit, b[i]!), m.and(c[i]!, m.or(bit, b[i]!))));
  const sum1 = add(m, 32, h, k, w, choice, sumOfTurns(m, e, [6, 11, 25]));
  const newA = add(m, 32, sumOfTurns(m, a, [2, 13, 22]), majority, sum1);
  m.output('next', joinWords([newA, a, b, c, add(m, 32, d, sum1), e, f, g]));
  return m;
}

// Section 6.2.2, step 1: the word that enters 16 rounds behind the first of `schedule`.
function messageWord(): Module {
  const m = new Module('sha256_message');
  const schedule = m.inputs('schedule', 512);
  const word = wordsOf(schedule);
  const sigma0 = sumOfTurns(m, word[1]!, [7, 18], 3);
  const sigma1 = sumOfTurns(m, word[14]!, [17, 19], 10);
  m.output('next', add(m, 32, word[0]!, word[9]!, sigma0, sigma1));
  return m;
}

// Section 6.2.2, step 4.
function finalSum(): Module {
  const m = new Module('sha256_final');
  const hash = wordsOf(m.inputs('hash', 256));
  const working = wordsOf(m.inputs('working', 256));
  m.output('sum', joinWords(hash.map((word, i) => add(m, 32, word, working[i]!))));
  return m;
}

// The constants of section 4.2.2 as a decoder of the round and one or-tree a bit.
function roundConstants(): Module {
  const m = new Module('sha256_constants');
  const bits = m.inputs('round', 6);
  const eighths = [bits.slice(0, 3), bits.slice(3)].map((part) =>
    Array.from({ length: 8 }, (_, i) => equals(m, part, i)),
  );
  const isRound = Array.from({ length: 64 }, (_, i) =>
    m.and(eighths[0]![i & 7]!, eighths[1]![i >> 3]!),
  );
  const constants = fractions(64, 3);
  const k = Array.from({ length: 32 }, (_, bit) =>
    tree(
      m,
      'or',
      isRound.filter((_, i) => (constants[i]! >> BigInt(bit)) & 1n),
    ),
  );
  m.output('k', k);
  return m;
}

// The xor of the word turned right by each of `turns`, and of the word shifted right.
function sumOfTurns(m: Module, word: Bus, turns: readonly number[], shift?: number): Bus {
  return word.map((_, i) => {
    const terms = turns.map((turn) => word[(i + turn) % 32]!);
    const shifted = shift === undefined ? [] : word.slice(i + shift, i + shift + 1);
    return m.xor(...terms, ...shifted);
  });
}

// Section 5.3.3, joined to one number.
function initialHash(): bigint {
  return fractions(8, 2).reduce((joined, word) => (joined << 32n) | word, 0n);
}

// The first 32 bits of the fractional parts of the roots of the first primes.
function fractions(count: number, degree: 2 | 3): bigint[] {
  const primes: number[] = [];
  for (let n = 2; primes.length < count; n++) {
    if (primes.every((prime) => n % prime !== 0)) primes.push(n);
  }
  return primes.map(
    (prime) => integerRoot(BigInt(prime) << BigInt(32 * degree), degree) % 2n ** 32n,
  );
}

function integerRoot(value: bigint, degree: 2 | 3): bigint {
  let root = 0n;
  for (let bit = 1n << 40n; bit > 0n; bit >>= 1n) {
    if ((root | bit) ** BigInt(degree) <= value) root |= bit;
  }
  return root;
}

// Words from the most significant down, as the standard counts them.
function wordsOf(bus: Bus): Bus[] {
  return Array.from({ length: bus.length / 32 }, (_, i) =>
    bus.slice(bus.length - 32 * i - 32, bus.length - 32 * i),
  );
}

function joinWords(words: readonly Bus[]): Bus {
  return words.toReversed().flat();
}
