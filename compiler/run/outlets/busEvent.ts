import type { BusCheck } from '../../circuit/circuit.js';

/** A bus whose drivers disagreed (`conflict`), or that none drove while it was read (`float`). */
export interface BusEvent {
  readonly bus: string;
  readonly kind: BusCheck['kind'];
  /** The first cycle at whose sampling it was so, and how many there were. */
  readonly firstCycle: number;
  readonly cycles: number;
  readonly file?: string;
  readonly line?: number;
  readonly column?: number;
}

/** `bus.v:3:11: w: drivers disagree at cycle 12, in 345 cycles`. */
export function busEventText(event: BusEvent): string {
  const { bus, kind, firstCycle, cycles, file, line, column } = event;
  const place = file === undefined ? '' : `${file}:${line}:${column}: `;
  const what = kind === 'conflict' ? 'its drivers disagree' : 'nothing drives it';
  const often = cycles === 1 ? 'in that cycle alone' : `in ${cycles} cycles in all`;
  return `${place}bus ${bus}: ${what} first at cycle ${firstCycle}, ${often}`;
}
