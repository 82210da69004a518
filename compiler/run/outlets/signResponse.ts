import { Signature } from '../../../runtime/signature.js';
import type { OutletPlan } from './outlet.js';

/**
 * Signs the response: `RunSummary.signature`. With an expected signature, sixteen hexadecimal
 * digits, a run of another is not as expected; any other text throws RangeError.
 */
export function signResponse(expected?: string): OutletPlan {
  if (expected !== undefined && !/^[0-9a-f]{16}$/i.test(expected)) {
    throw new RangeError(`a signature has sixteen hexadecimal digits, got ${expected}`);
  }
  const wanted = expected?.toLowerCase();
  return {
    open({ design, saved }) {
      const signature = new Signature(design.layout);
      if (saved !== undefined) signature.restore(saved as Uint32Array);
      return {
        wantsResponse: true,
        take({ rows, cycles }) {
          signature.add(rows, cycles);
          return undefined;
        },
        save: () => signature.save(),
        finish: () => ({
          signature: signature.digits(),
          ...(wanted !== undefined && { expectedSignature: wanted }),
        }),
        discard: () => undefined,
      };
    },
  };
}
