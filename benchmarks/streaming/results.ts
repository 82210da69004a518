/** One way of streaming. Times are without what a run of one cycle takes, the best of all rounds. */
export interface StreamingFigure {
  readonly name: string;
  /** Options of `run` beside `--cycles`. */
  readonly options: string;
  readonly cycles: number;
  readonly seconds: number;
  /** Of all threads, user and system. */
  readonly processorSeconds: number;
  /** The most memory of the whole process in any round. */
  readonly peakBytes: number;
}

/** What `streaming.json` holds. */
export interface StreamingResult {
  readonly machine: {
    readonly processor: string | undefined;
    readonly cores: number;
    readonly node: string;
    /** Processes that wanted a core, on average over the minute before; more than cores is busy. */
    readonly load: number;
  };
  readonly command: string;
  readonly rounds: number;
  readonly figures: readonly StreamingFigure[];
}

/** The results as a page to read. */
export function pageOf({ machine, command, rounds, figures }: StreamingResult): string {
  const { processor, cores, node, load } = machine;
  const lines = [
    '# Streaming',
    '',
    'Stimuli, responses and expectations of all forms, through circuits of 32 flip-flops with 32 bits',
    'of input and of output a cycle, so that the streams are what is measured. A row is a cycle.',
    '',
    `Measured on ${cores} cores of ${processor}, Node ${node}, by`,
    `\`${command}\`,`,
    `with ${load.toFixed(1)} other processes at work on average. The best of ${rounds} runs, less what a run of`,
    'one cycle takes. On a busy machine the rate by the time of the processor, which counts all',
    'threads of Node, says more than the rate by the time that has passed.',
    '',
    '| | million cycles/s | by processor time | most memory |',
    '|---|---|---|---|',
    ...figures.map(row),
    '',
    'The options of `run` for each line stand in `streaming.json`.',
  ];
  return `${lines.join('\n')}\n`;
}

function row({ name, cycles, seconds, processorSeconds, peakBytes }: StreamingFigure): string {
  const rate = (time: number): string => (cycles / 1e6 / time).toPrecision(3);
  const memory = `${Math.round(peakBytes / 1e6)} MB`;
  return `| ${name} | ${rate(seconds)} | ${rate(processorSeconds)} | ${memory} |`;
}
