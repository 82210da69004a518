import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { diagnosticText } from '../../../compiler/cli/printDiagnostics.js';
import { type Diagnostic, Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { hasPublishedCircuits } from '../../support/published.js';
import { type Damage, damage, damaged } from './damage.js';
import { generatedTexts, ownTexts, publishedTexts, type Texts } from './texts.js';

const seed = Number(process.env.SEED ?? 20260611);
const most = Number(process.env.RUNS ?? 0);

/** Reads texts with the first file, or another one, damaged. */
function readDamaged({ files, included, top }: Texts, which: number, damages: readonly Damage[]) {
  const target = which % files.length;
  const sources = files.map(
    ([path, bytes], i) => new Source(path, i === target ? damaged(bytes, damages) : bytes),
  );
  const readInclude = (path: string): Source | undefined => {
    const bytes = included.get(path);
    return bytes && new Source(path, bytes);
  };
  const diagnostics = new Diagnostics();
  const options = { readInclude, ...(top !== undefined && { top }) };
  const circuit = readNetlist(sources, options, diagnostics);
  return { circuit, diagnostics };
}

// A report of how many more there are, and nothing else, has no place.
const isCount = ({ message }: Diagnostic): boolean => /^\d+ more /.test(message);

/** Checks what holds of any text: a circuit, or errors with places, and nothing thrown. */
function check(texts: readonly Texts[], runs: number): void {
  const damages = fc.oneof(
    { weight: 3, arbitrary: fc.tuple(damage) },
    { weight: 1, arbitrary: fc.array(damage, { minLength: 2, maxLength: 5 }) },
  );
  fc.assert(
    fc.property(fc.nat(texts.length - 1), fc.nat(7), damages, (index, which, list) => {
      const { circuit, diagnostics } = readDamaged(texts[index]!, which, list);
      expect(circuit === undefined).toBe(diagnostics.hasErrors);
      for (const diagnostic of diagnostics.list) {
        const { span, severity } = diagnostic;
        if (severity === 'error' && !isCount(diagnostic)) expect(span).toBeDefined();
        if (span !== undefined) {
          expect(span.start).toBeLessThanOrEqual(span.end);
          expect(span.end).toBeLessThanOrEqual(span.source.bytes.length);
        }
        const text = diagnosticText(diagnostic);
        expect(text.length).toBeLessThan(20_000);
        expect(text).not.toMatch(/\[object|NaN/);
      }
    }),
    { seed, numRuns: most || runs },
  );
}

describe('a damaged text', () => {
  it('of a circuit or a cell library is read, or refused with places', () => {
    check(ownTexts(), 150);
  });

  it('of a generated design is read, or refused with places', () => {
    check(generatedTexts(seed, 30), 400);
  });

  it.runIf(hasPublishedCircuits)('of a published circuit is read, or refused with places', () => {
    check(publishedTexts(new URL('../../../../shared/circuits/', import.meta.url)), 200);
  });
});
