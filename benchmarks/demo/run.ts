import { mkdirSync, mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { BEFORE_FAULT, demoPage, packOptions, clockstride as runTool } from './page.js';
import { sorterNetlist } from './sorter.js';
import { sorterExpectation } from './specification.js';

/** A bit over five and a half hours of the sorter's time. */
const CYCLES = 2_000_000;
const FIRST_SHOWN = BEFORE_FAULT - 1;
const LAST_SHOWN = BEFORE_FAULT + 4;

const folder = mkdtempSync(join(tmpdir(), 'clockstride-demo-'));

function say(text: string): void {
  process.stdout.write(`${text}\n`);
}

/** Runs the tool in the demo's folder and shows what it says. */
function clockstride(...given: string[]): number | null {
  say(`\n$ npx clockstride ${given.join(' ')}`);
  return runTool(folder, given);
}

function show(file: string, first: number, last: number): void {
  const lines = readFileSync(join(folder, file), 'utf8').split('\n');
  for (const line of [lines[0], ...lines.slice(first + 1, last + 2)]) say(`  ${line}`);
}

say(`A parcel sorter's sequencer, as a gate-level netlist. One cycle is one tick of 10 ms. Every
43 minutes the belt stops for ten seconds of service. The specification tells for each tick
whether the belt is ready and where parcels are to be diverted.

The files of this demo are in ${folder}`);
writeFileSync(join(folder, 'sorter.v'), sorterNetlist());
writeFileSync(join(folder, 'specified.csv'), [...sorterExpectation(CYCLES)].join(''));

say('\nFirst, what kind of circuit it is:');
clockstride('inspect', 'sorter.v');

say(
  `\nNow ${CYCLES.toLocaleString('en-US')} cycles, compared with the specification tick by tick:`,
);
const found = clockstride(
  ...['run', 'sorter.v', '--cycles', String(CYCLES), '--expect', 'specified.csv'],
);
if (found !== 1) throw new Error(`expected a departure (exit status 1), got ${found}`);

say(`\nMore than a million cycles are as specified; then, after 2 h 53 min, the belt does not start
again after its service. To see why, write the response up to there and look at the last rows:`);
clockstride('run', 'sorter.v', '--cycles', String(LAST_SHOWN + 1), '--response', 'response.csv');
show('response.csv', FIRST_SHOWN, LAST_SHOWN);

say(`
"tick_now" is 1,041,001 (0xfe269); "service_due", the time of the next service, is 251,424
(0x3d620). It should be 1,300,000, but the timer has 20 bits: both numbers wrap at 1,048,576, and
the due time has wrapped already. The comparator asks "now >= due" as if they never did, so it takes the next
service for long overdue, again and again, until the clock has wrapped too.

What to look at next: the comparator due_comparator in sorter.v. Times that wrap are compared by
the sign of their difference. With that repair, made by one gate in place of another:`);
writeFileSync(join(folder, 'repaired.v'), sorterNetlist(true));
const repaired = clockstride(
  ...['run', 'repaired.v', '--cycles', String(CYCLES), '--expect', 'specified.csv'],
);
if (repaired !== 0) throw new Error(`expected agreement (exit status 0), got ${repaired}`);

say('\nAnd how fast can it go, with nothing to compare? Eleven and a half days of the sorter:');
clockstride('run', 'repaired.v', '--cycles', '100000000');

say('\nLast, the sorter as a page, to see all this and to show it to others:');
mkdirSync(dirname(demoPage), { recursive: true });
const packed = clockstride(...packOptions(demoPage));
if (packed !== 0) throw new Error(`expected a page (exit status 0), got ${packed}`);
say(`
Open ${demoPage}
in a browser, leap ${BEFORE_FAULT} cycles, and step from there: "belt_ready" rises as the service is over, and
falls at once.`);
