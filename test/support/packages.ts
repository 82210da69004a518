import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterAll } from 'vitest';
import type { Design } from '../../compiler/compile.js';
import { type PackRequest, type PackSummary, packDesign } from '../../compiler/pack/packDesign.js';
import type * as packaged from '../../runtime/model/index.js';
import type * as lanes from '../../runtime/model/lanes/index.js';

/** What `model.mjs` of a package exports. */
export type ModelModule = typeof packaged;

/** A folder for packages, gone after the tests. */
export function packageFolder(): string {
  const folder = mkdtempSync(join(tmpdir(), 'clockstride-pack-'));
  afterAll(() => rmSync(folder, { recursive: true }));
  return folder;
}

/** Packs a design into a folder. */
export const packInto = (
  output: string,
  design: Design,
  request: Partial<PackRequest> = {},
): Promise<PackSummary> =>
  packDesign(design, { output, keepNames: 'ports', version: '0.0.0', reading: {}, ...request });

/** The module of a package, as a program imports it. */
export const importPackage = (folder: string): Promise<ModelModule> =>
  import(pathToFileURL(join(folder, 'model.mjs')).href);

/** The module of a package of many lanes. */
export const importLanes = (folder: string): Promise<typeof lanes> =>
  import(pathToFileURL(join(folder, 'model.mjs')).href);
