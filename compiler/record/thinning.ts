/** A checkpoint as far as thinning looks at it. */
export interface Kept {
  readonly cycle: number;
  readonly bytes: number;
}

/** How much a record may keep. */
export interface KeepLimits {
  readonly most: number;
  readonly bytes: number;
}

/** What records keep: their checkpoints take less than 64 MB together with all else. */
export const keepLimits: KeepLimits = { most: 64, bytes: 56e6 };

/** The newest ones are never thinned out: should one be damaged, the next is not far. */
const NEWEST = 3;

/**
 * The checkpoints to let go of, of a list in ascending order of cycles.
 *
 * While there are too many, or they are too large together, the one goes that leaves the smallest
 * gap between its neighbours, the earliest of several. The first and the newest three stay; where
 * even these are too large, only the newest does. So they are spread evenly: with `most` of 64 and
 * a steady pace, no gap is wider than about a thirtieth of the run.
 */
export function surplus<K extends Kept>(list: readonly K[], limits: KeepLimits = keepLimits): K[] {
  const kept = [...list];
  const gone: K[] = [];
  let bytes = kept.reduce((sum, each) => sum + each.bytes, 0);
  const drop = (index: number): void => {
    const [dropped] = kept.splice(index, 1);
    bytes -= dropped!.bytes;
    gone.push(dropped!);
  };
  while (kept.length > limits.most || bytes > limits.bytes) {
    const index = narrowest(kept);
    if (index === undefined) break;
    drop(index);
  }
  while (bytes > limits.bytes && kept.length > 1) drop(0);
  return gone;
}

function narrowest(kept: readonly Kept[]): number | undefined {
  let found: number | undefined;
  let least = Number.POSITIVE_INFINITY;
  for (let i = 1; i < kept.length - NEWEST; i++) {
    const gap = kept[i + 1]!.cycle - kept[i - 1]!.cycle;
    if (gap < least) {
      least = gap;
      found = i;
    }
  }
  return found;
}
