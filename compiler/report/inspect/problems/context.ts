import type { ClockRoots } from '../../../circuit/analyses/clockRoots.js';
import type { Design } from '../../../compile.js';
import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { NetWords } from '../netWords.js';

/** What the search for problems of one kind may look at, and where it reports. */
export interface ProblemContext {
  readonly design: Design;
  readonly roots: ClockRoots;
  readonly words: NetWords;
  readonly diagnostics: Diagnostics;
}
