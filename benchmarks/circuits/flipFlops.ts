import type { Definition, Net } from './nets.js';

/** What a flip-flop cell has beside clock, data and output. */
export interface FlipFlopKind {
  /** It captures only while its enable pin is 1. */
  readonly enable: boolean;
  /** It has an asynchronous reset pin, active at 1, which brings it to `value`, or to 0. */
  readonly reset: boolean;
  /** The value of the reset; without a reset, the value at power-up. */
  readonly value?: 0 | 1;
}

const cells = new Map<string, Definition>();

/**
 * The rising-edge D flip-flop of a kind: `dff`, and with suffixes `e` (enable), `r` (reset to 0),
 * `s` (reset to 1), `0` and `1` (value at power-up). The same kind is always the same object.
 */
export function flipFlopCell(kind: FlipFlopKind): Definition {
  const name = cellName(kind);
  const known = cells.get(name);
  if (known) return known;
  const pins = ['clk', ...(kind.enable ? ['enable'] : []), ...(kind.reset ? ['reset'] : []), 'd'];
  const inputs = pins.map((pin): Net => ({ name: pin, width: 1, role: 'input' }));
  const header = pins.map((pin) => `input ${pin}, `).join('');
  const lines = [`module ${name} (${header}output reg q);`, ...behaviour(kind), 'endmodule', ''];
  const cell: Definition = {
    name,
    ports: [...inputs, { name: 'q', width: 1, role: 'output' }],
    parts: () => [],
    lines: () => lines,
    size: () => ({ gates: 0, registers: 1 }),
  };
  cells.set(name, cell);
  return cell;
}

function cellName({ enable, reset, value }: FlipFlopKind): string {
  const suffix = reset ? (value === 1 ? 's' : 'r') : (value ?? '');
  return `dff${enable ? 'e' : ''}${suffix}`;
}

function behaviour({ enable, reset, value }: FlipFlopKind): string[] {
  const capture = `${enable ? 'if (enable) ' : ''}q <= d;`;
  if (reset) {
    return [
      '  always @(posedge clk or posedge reset)',
      `    if (reset) q <= 1'b${value ?? 0};`,
      `    else ${capture}`,
    ];
  }
  const powerUp = value === undefined ? [] : [`  initial q = 1'b${value};`];
  return [...powerUp, `  always @(posedge clk) ${capture}`];
}
