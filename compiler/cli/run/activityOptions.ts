import { type Command, Option } from 'commander';
import { activityTable } from '../../activity/activityTable.js';
import { type ActivityForm, countActivity } from '../../activity/countActivity.js';
import { saif } from '../../activity/saif.js';
import type { Design } from '../../compile.js';
import type { Emitter } from '../../emit/emitter.js';
import type { OutletPlan } from '../../run/outlets/outlet.js';
import { UsageError } from '../usageError.js';
import { version } from '../version.js';
import { chosenSignals, type WaveOptions, windowOf } from './waveOptions.js';

/** The files that the activity of nets goes to. */
export interface ActivityOptions {
  readonly activity?: string;
  readonly activityPicture?: string;
}

/** Adds the options that count the activity of nets. */
export function addActivityOptions(command: Command): Command {
  return command
    .addOption(
      new Option(
        '--activity <file>',
        'write toggles and time at 1 of every net, or of --nets: .csv, or .saif (IEEE 1801)',
      ),
    )
    .option(
      '--activity-picture <file>',
      'draw the activity by cycle range and by block of the hierarchy, SVG',
    );
}

/** The outlet that counts activity, if that is asked for. Throws UsageError for a wrong ending. */
export function activityOutlets(
  design: Design,
  options: ActivityOptions & WaveOptions,
  emitter: Emitter | undefined,
): OutletPlan[] {
  const { activity: path, activityPicture: picture, nets = [] } = options;
  if (path === undefined && picture === undefined) return [];
  const list = chosenSignals(design.circuit, nets);
  const file = path === undefined ? undefined : { path, form: formOf(path) };
  const window = windowOf(options);
  return [
    countActivity(design, {
      ...{ list, window },
      ...(file && { file }),
      ...(picture !== undefined && { picture }),
      ...(emitter && { emitter }),
    }),
  ];
}

function formOf(path: string): ActivityForm {
  if (path.endsWith('.csv')) return activityTable;
  if (path.endsWith('.saif')) return (activity) => saif(activity, version());
  throw new UsageError(
    `error: --activity ${path}: the ending tells the form, which is .csv or .saif (IEEE 1801)`,
  );
}
