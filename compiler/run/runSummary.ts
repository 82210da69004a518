import type { Departure } from '../../runtime/node/index.js';
import type { PowerUp } from '../circuit/powerUp.js';
import type { EngineName } from '../engines.js';
import { counted, figure } from '../report/figures.js';
import { type ActivitySummary, activityLines } from './outlets/activitySummary.js';
import { type BusEvent, busEventText } from './outlets/busEvent.js';
import { type StatesSummary, statesLines } from './outlets/statesSummary.js';

/** What a run came to; printed as it stands by `run --json`. */
export interface RunSummary {
  readonly cycles: number;
  readonly seconds: number;
  readonly cyclesPerSecond: number;
  readonly engine: EngineName;
  readonly powerUp: PowerUp;
  /** CRC-64 of the response, sixteen hexadecimal digits, where asked for. */
  readonly signature?: string;
  /** What the signature should have been, where that was said. */
  readonly expectedSignature?: string;
  /** The first departure from the expectation. */
  readonly mismatch?: Mismatch;
  /** How many departures there were, where all were asked for. */
  readonly mismatches?: number;
  /** Set where the run ended before its last cycle. */
  readonly stopped?: {
    readonly cycle: number;
    readonly reason: string;
    /** The condition that has ended it, as it was written. */
    readonly condition?: string;
  };
  /** How the states come again, where that was looked for and found. */
  readonly repetition?: { readonly leadIn: number; readonly period: number };
  /** State elements that are x at the end of a three-valued run. */
  readonly unknownRegisters?: readonly string[];
  /** Buses that were in conflict or floated, where the circuit has buses. */
  readonly buses?: readonly BusEvent[];
  /** What the nets did, where that was counted. */
  readonly activity?: ActivitySummary;
  /** The state machines that were followed. */
  readonly states?: readonly StatesSummary[];
  readonly notes: readonly string[];
}

/** A departure as `--json` prints it. */
export type Mismatch = Pick<Departure, 'cycle' | 'port' | 'expected' | 'actual'>;

const SHOWN = 20;

/** Why a run stopped that the user has stopped. */
export const INTERRUPTED = 'interrupted';

/**
 * What the command ends with: 1 where a run departs from what is expected, has met a condition that
 * ends it, or was interrupted.
 */
export const exitStatus = (summary: RunSummary): 0 | 1 =>
  summary.mismatch !== undefined ||
  isTold(summary) ||
  summary.signature !== (summary.expectedSignature ?? summary.signature)
    ? 1
    : 0;

// Other ends have lines of their own.
const isTold = ({ stopped }: RunSummary): boolean =>
  stopped?.condition !== undefined || stopped?.reason === INTERRUPTED;

/** A summary as lines of text. `expectation` names what the run was compared with. */
export function summaryText(summary: RunSummary, expectation: string | undefined): string {
  const { cycles, seconds, cyclesPerSecond, engine, powerUp } = summary;
  const lines = [
    `${counted(cycles, 'cycle')} in ${seconds.toFixed(2)} s, ${rateText(cyclesPerSecond)}` +
      ` (engine ${engine}, power-up ${powerUp})`,
  ];
  lines.push(...signatureLines(summary));
  if (summary.repetition !== undefined) lines.push(repetitionText(summary.repetition));
  if (summary.unknownRegisters !== undefined) lines.push(unknownText(summary.unknownRegisters));
  lines.push(...busLines(summary.buses ?? []));
  lines.push(...activityLines(summary.activity), ...statesLines(summary.states));
  if (summary.stopped !== undefined && isTold(summary)) {
    lines.push(`stopped at cycle ${figure(summary.stopped.cycle)}: ${summary.stopped.reason}`);
  }
  for (const note of summary.notes) lines.push(`note: ${note}`);
  if (expectation !== undefined) lines.push(verdict(summary, expectation));
  return lines.join('\n');
}

function signatureLines({ signature, expectedSignature }: RunSummary): string[] {
  if (signature === undefined) return [];
  if (expectedSignature === undefined) return [`signature ${signature}`];
  if (signature === expectedSignature) return [`signature ${signature}, as expected`];
  return [`signature ${signature}, expected ${expectedSignature}`];
}

function repetitionText({ leadIn, period }: NonNullable<RunSummary['repetition']>): string {
  if (period === 1) return `the state stands still from cycle ${figure(leadIn)} on`;
  return `states repeat every ${figure(period)} cycles, from cycle ${figure(leadIn)} on`;
}

function busLines(buses: readonly BusEvent[]): string[] {
  const rest = buses.length - SHOWN;
  const more = rest > 0 ? [`and ${rest} more buses in conflict or floating`] : [];
  return [...buses.slice(0, SHOWN).map(busEventText), ...more];
}

function verdict({ mismatch, mismatches }: RunSummary, expectation: string): string {
  if (mismatch === undefined) return `as expected by ${expectation}`;
  if (mismatches !== undefined && mismatches > 1) {
    return `${figure(mismatches)} departures from ${expectation}, the first at cycle ${mismatch.cycle}`;
  }
  return `departs from ${expectation} at cycle ${mismatch.cycle}`;
}

function unknownText(names: readonly string[]): string {
  if (names.length === 0) return 'every register is known';
  const rest = names.length > SHOWN ? `, and ${names.length - SHOWN} more` : '';
  return `${names.length} still unknown: ${names.slice(0, SHOWN).join(', ')}${rest}`;
}

/** A rate in words that fit its size. */
export function rateText(perSecond: number): string {
  if (perSecond >= 1e6) return `${(perSecond / 1e6).toPrecision(3)} million cycles/s`;
  if (perSecond >= 1e3) return `${(perSecond / 1e3).toPrecision(3)} thousand cycles/s`;
  return `${perSecond.toPrecision(3)} cycles/s`;
}
