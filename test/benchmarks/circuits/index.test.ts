import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';
import { circuits } from '../../../benchmarks/circuits/index.js';
import { flatten } from './flatten.js';

function named(name: string) {
  return circuits.find((circuit) => circuit.name === name)!;
}

describe('the table of circuits', () => {
  test.each(circuits)(
    '$name has as many gates and flip-flops in its text as it says',
    (circuit) => {
      const flat = flatten([...circuit.write()].join(''));
      const gates = flat.gates.filter(({ assigned }) => !assigned).length;
      expect({ gates, registers: flat.flipFlops.length }).toEqual(circuit.build().size());
    },
  );

  test.each(circuits)('$name uses the output of every gate', (circuit) => {
    const { gates, flipFlops, vectors } = flatten([...circuit.write()].join(''));
    const used = new Set([
      ...gates.flatMap((gate) => gate.inputs),
      ...flipFlops.flatMap(({ d, enable, reset }) => [d, enable, reset]),
      ...circuit.build().ports.flatMap((port) => vectors.get(port.name)!),
    ]);
    expect(gates.filter((gate) => !used.has(gate.output))).toEqual([]);
  });

  test('refuses parameters that a circuit has not, and values out of range', () => {
    expect(() => named('uart').build({ baud: 3 })).toThrow(
      'uart has no parameter baud; it has: divider',
    );
    expect(() => named('crc32').build({ width: 3 })).toThrow('it has: none');
    expect(() => named('uart').build({ divider: 3 })).toThrow(
      'expected divider to be whole, 4 to 65536, got 3',
    );
    expect(() => named('aes128').build({ cores: 1.5 })).toThrow('got 1.5');
  });
});

describe('the command that writes a circuit', () => {
  const write = fileURLToPath(new URL('../../../benchmarks/circuits/write.ts', import.meta.url));
  const run = (...words: string[]) =>
    spawnSync(process.execPath, ['--import', 'tsx', write, ...words], { encoding: 'utf8' });

  test('writes the text of the circuit and nothing else', () => {
    const { status, stdout, stderr } = run('uart', 'divider=9');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toBe([...named('uart').write({ divider: 9 })].join(''));
  });

  test('tells how to use it, on stderr and with status 2, when asked for nothing known', () => {
    const { status, stdout, stderr } = run('abacus');
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toContain('there is no circuit abacus\n');
    for (const { name } of circuits) expect(stderr).toContain(`\n  ${name}`);
  });

  test('refuses a setting that is no number', () => {
    const { status, stderr } = run('uart', 'divider=fast');
    expect({ status, stderr }).toEqual({
      status: 2,
      stderr: 'expected PARAMETER=NUMBER, got divider=fast\n',
    });
  });
});
