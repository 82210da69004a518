const HIGH = /^[ad]?(vdd|vcc|vpwr|vpb|vnw)[a-z]{0,3}$/;
const LOW = /^[ad]?(vss|gnd|vgnd|vnb|vpw)[a-z]{0,3}$/;

/**
 * The level of the supply that a port's name stands for, as is common practice: 1 for `VDD`, `VCC`,
 * `VPWR` and the well pins `VPB` and `VNW`, 0 for `VSS`, `GND`, `VGND`, `VNB` and `VPW`, with
 * letters, digits and words of a domain behind them, or A or D in front (`VDDIO`, `vccd1`, `AVSS`).
 * Undefined for any other name.
 */
export function supplyLevel(name: string): 0 | 1 | undefined {
  const [word = ''] = name.toLowerCase().split(/[^a-z]/);
  if (HIGH.test(word)) return 1;
  return LOW.test(word) ? 0 : undefined;
}
