import { invert, muxConstant } from './logic.js';
import { Module } from './netlistWriter.js';

const reflectedPolynomial = 0xedb88320;
const allOnes = 0xffffffffn;

/**
 * The bit-serial CRC of IEEE 802.3, section 3.2.9, as `crc32` with inputs `clk`, `data`,
 * `enable`, `restart` and output `crc[31:0]`. It takes `data` in each cycle with `enable`, every
 * byte least significant bit first; `restart` goes before `enable` and begins a new message, as
 * power-up does. `crc` is complemented and so arranged that it reads cbf43926 after "123456789".
 */
export function crc32(): Module {
  const m = new Module('crc32');
  const clk = m.input('clk');
  const data = m.input('data');
  const enable = m.input('enable');
  const restart = m.input('restart');
  const remainder = m.wires('remainder', 32);
  const feedback = m.named('feedback', m.xor(data, remainder[0]!));
  const divided = remainder.map((_, i) => {
    const above = remainder[i + 1];
    if (above === undefined) return feedback;
    return (reflectedPolynomial >>> i) & 1 ? m.xor(above, feedback) : above;
  });
  const step = m.named('step', m.or(enable, restart));
  const next = muxConstant(m, restart, divided, allOnes);
  m.flipFlops(remainder, next, { clock: clk, enable: step, value: allOnes });
  m.output('crc', invert(m, remainder));
  return m;
}
