import { mkdirSync, readFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { reason } from '../../../compiler/cli/netlists.js';
import {
  type ExpectationContext,
  expectationName,
  expectationOutlets,
} from '../../../compiler/cli/run/expectationOptions.js';
import { refuseOutputs } from '../../../compiler/cli/run/outputFiles.js';
import { responseOutlets } from '../../../compiler/cli/run/responseOptions.js';
import { stimulusOf } from '../../../compiler/cli/run/stimulusOptions.js';
import { UsageError } from '../../../compiler/cli/usageError.js';
import { designOf } from '../../../compiler/compile.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { accumulator } from '../netlists.js';

const design = designOf(readNetlist([new Source('sum.v', accumulator)], {}, new Diagnostics())!);
const context: ExpectationContext = {
  ...{ design, engine: 'bytecode' as const, powerUp: 'zero' as const, seed: 0n },
  onDeparture: () => undefined,
};

const refused = async (action: () => unknown): Promise<string> => {
  const error = await Promise.resolve()
    .then(action)
    .catch((thrown: unknown) => thrown);
  expect(error).toBeInstanceOf(UsageError);
  return (error as UsageError).message;
};

describe('options that do not fit together', () => {
  it.each([
    ['--response r.vcd: a response is CSV or packed rows (.rows)', { response: 'r.vcd' }],
    ['--response r.mjs: a response is CSV or packed rows (.rows)', { response: 'r.mjs' }],
    ['--ports is for --response FILE, which is missing', { ports: ['total'] }],
    ['--every is for --response FILE, which is missing', { every: 3 }],
    ['--changes is for --response FILE, which is missing', { changes: true as const }],
    ['--response-form is for --response FILE', { responseForm: 'packed' as const }],
    ['--ports: no such port: sum; there are total[7:0], even', { response: 'r', ports: ['sum'] }],
    ['--ports: even is named twice', { response: 'r', ports: ['even', 'even'] }],
  ])('are refused for the response: %s', async (message, options) => {
    expect(await refused(() => responseOutlets(options, design))).toContain(`error: ${message}`);
  });

  it.each([
    ['without a stimulus, say how long to run with --cycles N', {}],
    ['without a stimulus, say how long to run with --cycles N', { random: 1n }],
    ['--hold is for --random SEED, which is missing', { cycles: 1, hold: 2 }],
    ['--weight is for --random SEED', { cycles: 1, weight: new Map([['step', 1]]) }],
    ['--stimulus-form is for --stimulus FILE', { cycles: 1, stimulusForm: 'vcd' as const }],
    ['--stimulus-period is for --stimulus FILE', { cycles: 1, stimulusPeriod: '10ns' }],
    ['--stimulus-scope is for --stimulus FILE', { cycles: 1, stimulusScope: 'a' }],
    ['--weight: clk is a clock', { cycles: 1, random: 1n, weight: new Map([['clk', 1]]) }],
    ['--weight: no such port: q', { cycles: 1, random: 1n, weight: new Map([['q', 1]]) }],
  ])('are refused for the stimulus: %s', async (message, options) => {
    expect(await refused(() => stimulusOf(design, options))).toContain(`error: ${message}`);
  });

  it.each([
    ['--expect r.vcd: expected are CSV or packed rows (.rows)', { expect: 'r.vcd' }],
    ['--expect-form is for --expect FILE, which is missing', { expectForm: 'csv' as const }],
    ['--expect-top is for --expect-netlist FILE, which is missing', { expectTop: 'a' }],
  ])('are refused for the expectation: %s', async (message, options) => {
    const action = () => expectationOutlets(options, context);
    expect(await refused(action)).toContain(`error: ${message}`);
  });

  it('are named together in the verdict', () => {
    expect(expectationName({})).toBeUndefined();
    const all = { expect: 'a.csv', expectModel: 'm.mjs', expectNetlist: ['b.v', 'c.lib'] };
    expect(expectationName(all)).toBe('a.csv and m.mjs and b.v c.lib');
  });
});

describe('files to be written', () => {
  it.each([
    ['--table - : it goes to a file, not to standard output; name one', { table: '-' }],
    ['--activity-picture - : it goes to a file', { activityPicture: '-' }],
    [
      '--response and --activity both write ./a.csv; name two files',
      { response: 'a.csv', activity: './a.csv' },
    ],
    ['--states-table and --states-graph both write s', { statesTable: 's', statesGraph: 's' }],
  ])('are refused: %s', async (message, options) => {
    expect(await refused(() => refuseOutputs(options))).toContain(`error: ${message}`);
  });

  it('may be several, standard output for the response, or a device that takes what comes', () => {
    refuseOutputs({ response: '-', table: 'a.csv', picture: 'a.svg' });
    refuseOutputs({ response: '/dev/null', table: '/dev/null' });
  });
});

describe('what the system says of a path', () => {
  const own = fileURLToPath(import.meta.url);
  const folder = dirname(own);
  it.each([
    [`there is no folder ${folder}/none`, () => readFileSync(`${folder}/none/a`)],
    ['there is no such file', () => readFileSync(`${folder}/none`)],
    [`${own} is no folder`, () => readFileSync(`${own}/a`)],
    ['there is a file of that name', () => mkdirSync(own)],
    ['it is a directory', () => readFileSync(folder)],
  ])('is told in words: %s', (words, action) => {
    let thrown: unknown;
    try {
      action();
    } catch (error) {
      thrown = error;
    }
    expect(reason(thrown)).toBe(words);
  });
});
