const CLOCK_WORDS = new Set([
  'ck',
  'ckb',
  'ckn',
  'clk',
  'clkb',
  'clkn',
  'clock',
  'cp',
  'cpb',
  'cpn',
  'nclk',
  'phi',
]);

// `clk_en`, `clken`, `clock_gate`, `clk_sel` steer a clock and are none.
const STEERING = /(^|^clk|^clock)(en|ena|enable|gate|gating|sel|select|stop|mode|div)$/;

/**
 * Whether a port's name says that it is a clock: one of its words is `clk`, `clock`, `ck`, `cp`,
 * `phi` or an inverted form of these, or begins or ends with `clk` or `clock`, and no word says
 * that it enables or selects one (`clk_en`, `clksel`).
 *
 * Words end at underscores, digits, brackets and where a small letter meets a capital one.
 */
export function isClockName(name: string): boolean {
  const words = name
    .replace(/([a-z])([A-Z])/g, '$1 $2')
    .toLowerCase()
    .split(/[^a-z]+/);
  if (words.some((word) => STEERING.test(word))) return false;
  return words.some((word) => CLOCK_WORDS.has(word) || /^(clk|clock)|(clk|clock)$/.test(word));
}
