import type { StimulusSource } from '../../../runtime/node/index.js';
import type { OutletPlan } from './outlet.js';

/** Lets a stimulus look back at the response, and say at the end what is to be said of it. */
export function followStimulus(source: StimulusSource): OutletPlan {
  const { see } = source;
  return {
    open: () => ({
      wantsResponse: see !== undefined,
      interest: 'none',
      take(block) {
        see?.(block);
        return undefined;
      },
      finish: () => ({ notes: source.notes() }),
      discard: () => undefined,
      // One that has looked back may have become another than it would be without.
      ...(see === undefined && { save: () => null }),
    }),
  };
}
