import type { Used } from './children.js';

/** How fast files of one shape are read; times are the best of several readings. */
export interface ShapeResult {
  readonly name: string;
  /** Of all files read. */
  readonly bytes: number;
  readonly seconds: number;
  readonly processorSeconds: number;
  readonly peakBytes: number;
}

/** What `reading.json` holds. Times of processors are of all threads, user and system. */
export interface ReadingResult {
  readonly machine: {
    readonly processor: string | undefined;
    readonly cores: number;
    readonly node: string;
    /** Processes that wanted a core, on average over the minute before; more than cores is busy. */
    readonly load: number;
  };
  readonly command: string;
  readonly netlist: {
    readonly instances: number;
    /** Of all files read: the netlist and its cell library. */
    readonly bytes: number;
    readonly nets: number;
    readonly registers: number;
  };
  /** From the files to the circuit, without the start of Node: the best of several readings. */
  readonly reading: {
    readonly readings: number;
    readonly seconds: number;
    readonly processorSeconds: number;
    readonly megabytesPerSecond: number;
    readonly megabytesPerProcessorSecond: number;
    readonly peakBytes: number;
    /** Peak memory, Node itself included, over the bytes of the text. */
    readonly memoryPerText: number;
  };
  /** Smaller files of other shapes, from the files to the circuit. */
  readonly shapes: readonly ShapeResult[];
  /** `clockstride inspect` from start to end. */
  readonly inspect: Used;
  /** `clockstride run` from start to the end of one cycle. */
  readonly firstResponse: Used;
}

/** The results as a page to read. */
export function pageOf(result: ReadingResult): string {
  const { machine, netlist, reading, inspect, firstResponse, command } = result;
  const { processor, cores, node, load } = machine;
  const count = netlist.instances.toLocaleString('en-US');
  const lines = [
    '# Reading large netlists',
    '',
    `A flat netlist of ${count} instances of library cells and gates with its cell library,`,
    `${megabytes(netlist.bytes)} of text, becomes a circuit of ${netlist.nets.toLocaleString('en-US')} nets and ${netlist.registers.toLocaleString('en-US')} registers.`,
    '',
    `Measured on ${cores} cores of ${processor}, Node ${node}, by`,
    `\`${command}\`,`,
    `with ${load.toFixed(1)} other processes at work on average. On a busy machine the time of the`,
    'processor, which counts all threads of Node, says more than the time that has passed.',
    '',
    '| | passed | processor | most memory |',
    '|---|---|---|---|',
    row(`file to circuit, best of ${reading.readings}`, reading),
    row('`clockstride inspect`', inspect),
    row('`clockstride run` up to the first response row', firstResponse),
    '',
    `That is ${figure(reading.megabytesPerSecond)} MB of text a second, ` +
      `${figure(reading.megabytesPerProcessorSecond)} MB a second of the`,
    `processor, and ${figure(reading.memoryPerText)} bytes of memory for each byte of text, Node itself included.`,
    '',
    'Smaller files of other shapes, from the file to the circuit. Node compiles its own code meanwhile,',
    'which weighs more the less there is to read.',
    '',
    '| | text | passed | processor | MB a second | most memory |',
    '|---|---|---|---|---|---|',
    ...result.shapes.map(shapeRow),
  ];
  return `${lines.join('\n')}\n`;
}

const row = (what: string, { seconds, processorSeconds, peakBytes }: Used): string =>
  `| ${what} | ${figure(seconds)} s | ${figure(processorSeconds)} s | ${megabytes(peakBytes)} |`;

const shapeRow = ({ name, bytes, seconds, processorSeconds, peakBytes }: ShapeResult): string =>
  `| ${name} | ${megabytes(bytes)} | ${seconds.toFixed(2)} s | ${processorSeconds.toFixed(2)} s | ` +
  `${figure(bytes / 1e6 / seconds)} | ${megabytes(peakBytes)} |`;

const figure = (value: number): string => value.toFixed(1);
const megabytes = (bytes: number): string => `${Math.round(bytes / 1e6)} MB`;
