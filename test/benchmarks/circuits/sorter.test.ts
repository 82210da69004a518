import { describe, expect, test } from 'vitest';
import { sorterExpectation, sorterNetlist } from '../../../benchmarks/demo/sorter.js';
import { evaluate } from './evaluate.js';

/** The first row of the expectation that the netlist departs from. */
function firstDeparture(netlist: string, cycles: number): string | undefined {
  const circuit = evaluate([netlist]);
  const rows = [...sorterExpectation(cycles)].join('').trimEnd().split('\n').slice(1);
  let now = 0;
  return rows.find((row) => {
    const [cycle, ready, divert] = row.split(',');
    circuit.clock(Number(cycle) - now);
    now = Number(cycle);
    return (
      circuit.get('belt_ready') !== BigInt(ready!) || circuit.get('divert') !== BigInt(divert!)
    );
  });
}

describe('the parcel sorter', () => {
  test('first departs from its specification at cycle 1,041,002, where the belt stops again', () => {
    expect(firstDeparture(sorterNetlist(), 1_100_000)).toBe('1041002,1,0x3');
  });

  test('follows its specification past two wraps of the due time when repaired', () => {
    expect(firstDeparture(sorterNetlist(true), 2_150_000)).toBeUndefined();
  });

  test('opens every diverter and stops for a service in what it expects', () => {
    const rows = [...sorterExpectation(270_000)].join('').trimEnd().split('\n');
    expect(rows.slice(0, 2)).toEqual(['cycle,belt_ready,divert', '0,1,0x0']);
    const values = new Set(rows.slice(1).map((row) => row.slice(row.indexOf(',') + 1)));
    for (const value of ['1,0x1', '1,0x2', '1,0x4', '0,0x0']) expect(values).toContain(value);
    const stopped = rows.filter((row) => row.endsWith(',0,0x0')).map((row) => row.split(',')[0]);
    expect(stopped).toEqual(['260001', '260002']);
  });
});
