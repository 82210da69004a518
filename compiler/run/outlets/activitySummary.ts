import { counted, figure } from '../../report/figures.js';

/** What the nets of a circuit did in a run, in short; clocks are left out. */
export interface ActivitySummary {
  /** Cycles counted. */
  readonly cycles: number;
  readonly nets: number;
  /** Changes of all nets between 0 and 1. */
  readonly toggles: number;
  readonly neverToggled: number;
  /** Of these, the first few by name. */
  readonly still: readonly string[];
  /** Nets with the most toggles. */
  readonly busiestNets: readonly { readonly name: string; readonly toggles: number }[];
  /**
   * Instances with the most toggles; a net counts for the one nearest to the top that names it.
   * Deep ones are joined with those around them where there are many.
   */
  readonly busiestBlocks: readonly {
    readonly name: string;
    readonly nets: number;
    readonly toggles: number;
  }[];
}

/** An activity as lines of text. */
export function activityLines(activity: ActivitySummary | undefined): string[] {
  if (activity === undefined) return [];
  const { cycles, nets, toggles, busiestNets, busiestBlocks } = activity;
  const perNet = nets * cycles === 0 ? 0 : toggles / (nets * cycles);
  const lines = [
    `activity: ${counted(toggles, 'toggle')} of ${counted(nets, 'net')} in ${counted(cycles, 'cycle')}, ` +
      `${Number(perNet.toPrecision(3))} per net and cycle; clocks apart`,
  ];
  if (busiestNets.length > 0) {
    const named = busiestNets.map(({ name, toggles }) => `${name} ${figure(toggles)}`);
    lines.push(`  busiest nets: ${named.join(', ')}`);
  }
  if (busiestBlocks.length > 1) {
    const named = busiestBlocks.map(
      ({ name, nets, toggles }) => `${name} ${figure(toggles)} (${figure(nets)} nets)`,
    );
    lines.push(`  busiest blocks: ${named.join(', ')}`);
  }
  return [...lines, `  never toggled: ${stillText(activity)}`];
}

function stillText({ neverToggled, still }: ActivitySummary): string {
  if (neverToggled === 0) return 'none';
  const rest = neverToggled - still.length;
  const more = rest > 0 ? ` and ${figure(rest)} more` : '';
  return `${figure(neverToggled)}: ${still.join(', ')}${more}`;
}
