import { aes128 } from './aes128.js';
import { mapped } from './cells/mapping/mapped.js';
import { counter } from './counter.js';
import { crc32 } from './crc32.js';
import { lock } from './machine.js';
import type { Definition } from './nets.js';
import { prbs, sequences } from './prbs.js';
import { sha256 } from './sha256.js';
import { uart } from './uart.js';
import { verilog } from './verilog.js';

/** A whole number that a circuit is built from. */
export interface Parameter {
  readonly meaning: string;
  readonly usual: number;
  readonly least: number;
  readonly most: number;
}

/** A circuit that can be built and written. */
export interface Circuit {
  readonly name: string;
  readonly summary: string;
  readonly parameters: Readonly<Record<string, Parameter>>;
  /** Builds the top module; parameters left out are as usual. Throws a RangeError for bad ones. */
  build(given?: Readonly<Record<string, number>>): Definition;
  /** Builds it and writes its Verilog text in chunks. */
  write(given?: Readonly<Record<string, number>>): Iterable<string>;
}

const library: Parameter = {
  meaning: 'cells of the library: 1; with clock tree and clock gates: 2',
  usual: 0,
  least: 0,
  most: 2,
};

/** The real circuits that benchmarks and checks run. */
export const circuits: readonly Circuit[] = [
  circuit('prbs', 'pseudo-random bit sequence of ITU-T O.150', (p) => prbs(p.order!), {
    order: {
      meaning: `stages: ${sequences.map((s) => s.order).join(', ')}`,
      usual: 23,
      least: 7,
      most: 31,
    },
  }),
  circuit('crc32', 'bit-serial CRC-32 of IEEE 802.3', crc32),
  circuit('counter', 'loadable 64-bit up counter', counter, { library }),
  circuit('uart', 'serial transmitter and receiver', (p) => uart(p.divider!), {
    divider: { meaning: 'cycles a bit', usual: 16, least: 4, most: 65536 },
  }),
  circuit(
    'lock',
    'sequencer of a canal lock, with timers',
    (p) => lock({ gate: p.gate!, water: p.water!, dwell: p.dwell! }),
    {
      gate: { meaning: 'cycles a gate moves', usual: 200, least: 1, most: 1e6 },
      water: { meaning: 'cycles until the alarm', usual: 3000, least: 1, most: 1e6 },
      dwell: { meaning: 'cycles a gate stands open', usual: 500, least: 1, most: 1e6 },
    },
  ),
  circuit('sha256', 'SHA-256 compression, one round a cycle', sha256, { library }),
  circuit('aes128', 'AES-128 encryption, one round a cycle', (p) => aes128(p.cores!), {
    cores: { meaning: 'cores one behind another', usual: 1, least: 1, most: 1000 },
    library,
  }),
];

function circuit(
  name: string,
  summary: string,
  make: (parameters: Readonly<Record<string, number>>) => Definition,
  parameters: Readonly<Record<string, Parameter>> = {},
): Circuit {
  const build: Circuit['build'] = (given = {}) => {
    const values = complete(name, parameters, given);
    const built = make(values);
    return values.library ? mapped(built, { hasClockTree: values.library === 2 }) : built;
  };
  return { name, summary, parameters, build, write: (given) => verilog(build(given)) };
}

function complete(
  circuitName: string,
  parameters: Readonly<Record<string, Parameter>>,
  given: Readonly<Record<string, number>>,
): Record<string, number> {
  for (const name of Object.keys(given)) {
    if (!Object.hasOwn(parameters, name)) {
      const known = Object.keys(parameters).join(', ') || 'none';
      throw new RangeError(`${circuitName} has no parameter ${name}; it has: ${known}`);
    }
  }
  const values = Object.entries(parameters).map(([name, { usual, least, most }]) => {
    const value = given[name] ?? usual;
    if (!Number.isInteger(value) || value < least || value > most) {
      throw new RangeError(`expected ${name} to be whole, ${least} to ${most}, got ${value}`);
    }
    return [name, value] as const;
  });
  return Object.fromEntries(values);
}
