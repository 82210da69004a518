import { existsSync, readFileSync } from 'node:fs';
import { Source } from '../../compiler/diagnostics/source.js';

/**
 * Published benchmark circuits (F. Brglez, D. Bryan, K. Kozminski, "Combinational profiles of
 * sequential benchmark circuits", ISCAS 1989), in a folder next to the project.
 */
const folder = new URL('../../../shared/circuits/', import.meta.url);

/** Whether the folder is there; suites that need it say so where it is not. */
export const hasPublishedCircuits = existsSync(folder);

/** Inputs, outputs, registers, gates and inverters, as the paper and the files have them. */
export const publishedCounts: Readonly<Record<string, readonly [number, number, number, number]>> =
  {
    s27: [4, 1, 3, 10],
    s298: [3, 6, 14, 119],
    s344: [9, 11, 15, 160],
    s386: [7, 7, 6, 159],
    s641: [35, 24, 19, 379],
    s1488: [8, 19, 6, 653],
    s5378: [35, 49, 179, 2779],
    's13207.1': [62, 152, 638, 7951],
    s35932: [35, 320, 1728, 16065],
  };

/** One of the files, by its path in the folder. */
export const publishedSource = (path: string): Source =>
  new Source(path, readFileSync(new URL(path, folder)));
