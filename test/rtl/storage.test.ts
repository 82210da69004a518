import { describe, it } from 'vitest';
import { expectModel, type Model, randomInputs, rtlDesign, type Values } from './circuits.js';

/** What is kept at power-up. */
const atStart = () => ({
  transparent: 0,
  clearable: 0,
  master: 0,
  slave: 0,
  reset_first: 0,
  set_first: 0,
  both_controls: 0,
  plain: 0,
  falling: 0,
  open: 0,
  by_gate: 0,
  hold_low: 0,
  by_pulse: 0,
  half: 0,
  divided: 0,
  ripple: 0,
  words: [0, 0, 0, 0],
  nor: 0,
});

type Kept = ReturnType<typeof atStart>;

/** The inputs change while the clock is low. */
function settle(s: Kept, { rst, set_n, enable, hold, d, sel }: Values): void {
  if (enable) s.transparent = d!;
  if (rst) s.clearable = 0;
  else if (!set_n) s.clearable = 15;
  else if (enable && !hold) s.clearable = (d! + 1) & 15;
  [s.master, s.open] = [d!, enable!];
  if (rst) s.reset_first = 0;
  else if (!set_n) s.reset_first = 15;
  if (!set_n) s.set_first = 15;
  else if (rst) s.set_first = 0;
  if (rst) [s.both_controls, s.falling, s.by_gate] = [5, s.falling | 12, 0];
  else if (!set_n) s.both_controls = 6;
  if (rst) [s.half, s.ripple, s.nor] = [0, 0, 0];
  else if (!set_n) s.nor = 1;
  if (enable && !rst) s.words[sel!] = ~d! & 15;
}

/** The clock rises. */
function rise(s: Kept, { rst, set_n, hold, d, sel }: Values): void {
  s.slave = s.master;
  s.hold_low = hold!;
  if (rst) return;
  if (set_n && !hold) {
    [s.reset_first, s.set_first] = [d!, d!];
    s.both_controls ^= d!;
  }
  s.plain = d!;
  s.falling = (s.falling & 3) | (d! & 12);
  if (s.open) s.by_gate = (s.by_gate + d!) & 15;
  s.half ^= 1;
  if (s.half) s.divided = (s.divided + sel!) & 3;
  // The first one's clock is inverted, so that it toggles at the rise of this one.
  s.ripple = (s.ripple + 1) & 7;
}

/** The clock falls. */
function fall(s: Kept, { d }: Values): void {
  s.falling = (s.falling & 12) | (s.plain & 3);
  if (!s.hold_low) s.by_pulse = d! ^ s.by_gate;
}

const storage = (): Model => {
  const s = atStart();
  return (row) => {
    settle(s, row);
    const outputs = {
      transparent: s.transparent,
      clearable: s.clearable,
      master_slave: s.slave,
      reset_first: s.reset_first,
      set_first: s.set_first,
      both_controls: s.both_controls,
      plain: s.plain,
      falling: s.falling,
      gated: s.by_gate,
      pulsed: s.by_pulse,
      divided: s.divided,
      ripple: s.ripple,
      file_word: s.words[((row.sel! & 1) << 1) | (row.sel! >> 1)]!,
      nor_q: s.nor,
    };
    rise(s, row);
    fall(s, row);
    return outputs;
  };
};

describe('forms of storage', () => {
  it('keep and pass values as their models do', async () => {
    const design = rtlDesign(['storage.v']);
    const rows = randomInputs(design, 15, 1500, (_, chance, cycle) => ({
      rst: cycle === 0 || chance(30) ? 1 : 0,
      set_n: chance(30) ? 0 : 1,
    }));
    await expectModel(design, storage, rows);
  });
});
