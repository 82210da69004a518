import { execFile } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import type { LaneCount } from '../../runtime/laneLayout.js';
import type { PackageIdentity } from '../../runtime/model/identity.js';
import { WholeFile } from '../../runtime/node/wholeFile.js';
import type { Circuit } from '../circuit/circuit.js';
import { isGate } from '../circuit/gates.js';
import type { Design } from '../compile.js';
import { type Emitter, localEmitter } from '../emit/emitter.js';
import { checkPackage, type PackageCheck } from './check.js';
import { declarations } from './declarations.js';
import { packedModule } from './describe.js';
import { exampleText } from './example.js';
import { netlistFingerprint, type ReadingOptions, sha256, sourceRecords } from './fingerprint.js';
import { keptMemories } from './keptMemories.js';
import { type KeepNames, keptNets } from './keptNets.js';
import { manifestText } from './manifest.js';
import { type NpmName, packageJsonText } from './packageJson.js';
import { pageText } from './page.js';
import { readmeText } from './readme.js';
import { resetPorts } from './resets.js';
import { modelModule, workerModule } from './runtimeTexts.js';
import { PackageFolder } from './writePackage.js';

/** How a design is packed. */
export interface PackRequest {
  /** Folder to write; absent, empty or an earlier package. */
  readonly output?: string;
  /** File for the model as one HTML page. */
  readonly page?: string;
  readonly keepNames: KeepNames;
  /** Independent sequences that run side by side; 1 unless given. */
  readonly lanes?: 1 | LaneCount;
  readonly npmName?: NpmName;
  /** Of this tool. */
  readonly version: string;
  /** What was chosen when the netlist was read; part of its fingerprint. */
  readonly reading: ReadingOptions;
  readonly emitter?: Emitter;
  /** Told how many cycles have been compared, of how many. */
  readonly onProgress?: (cycles: number, of: number) => void;
}

/** What was packed. */
export interface PackSummary {
  readonly model: string;
  readonly output?: string;
  readonly page?: string;
  readonly keptNets: number;
  /** Bytes by file. */
  readonly files: Readonly<Record<string, number>>;
  readonly check: PackageCheck;
}

/**
 * Writes the model package of a design: a folder that appears all at once, after the package in it
 * has been compared with the reference interpreter; or a page of the same model, or both. Equal
 * inputs give equal bytes.
 *
 * Throws `FolderRefused` and `PackageDeparture`, and RangeError where neither folder nor page is
 * asked for; what was there before is then as it was.
 */
export async function packDesign(design: Design, request: PackRequest): Promise<PackSummary> {
  const { output, page, lanes = 1 } = request;
  if (output === undefined && page === undefined) {
    throw new RangeError('expected an output or a page, got neither');
  }
  if (page !== undefined && lanes !== 1) {
    throw new RangeError(`expected 1 lane for a page, got ${lanes}`);
  }
  const temporary = output === undefined ? mkdtempSync(join(tmpdir(), 'clockstride-')) : undefined;
  let folder: PackageFolder | undefined;
  let file: WholeFile | undefined;
  try {
    folder = PackageFolder.begin(output ?? join(temporary!, 'package'));
    const { summary, pageOf } = await fill(folder, design, request);
    if (page !== undefined) {
      const text = pageOf();
      file = new WholeFile(page);
      file.put(Buffer.from(text));
    }
    if (output === undefined) file?.finish();
    else folder.finish(() => file?.finish());
    return summary;
  } catch (error) {
    file?.discard();
    throw error;
  } finally {
    folder?.discard();
    if (temporary !== undefined) rmSync(temporary, { recursive: true });
  }
}

async function fill(
  folder: PackageFolder,
  design: Design,
  request: PackRequest,
): Promise<{ summary: PackSummary; pageOf: () => string }> {
  const { layout, circuit } = design;
  const { keepNames, lanes = 1, npmName, version, reading } = request;
  const { emitter = localEmitter() } = request;
  const kept = keptNets(design, keepNames);
  const memories = keptMemories(design);
  const resets = resetPorts(circuit);
  const sources = sourceRecords(design);
  const netlist = netlistFingerprint(design, sources, reading);
  const { module, mayEnd } = await packedModule(design, kept, netlist, lanes, emitter);
  const identity: PackageIdentity = {
    name: layout.name,
    sha256: sha256(module),
    netlist,
    threeValued: layout.threeValued,
    lanes,
  };
  const example = exampleText(layout, resets, lanes);
  const files = new Map<string, string | Uint8Array>([
    ['model.wasm', module],
    ['model.mjs', modelModule(identity, version)],
    ...(lanes === 1 ? [['worker.mjs', workerModule(identity, version)] as const] : []),
    ['model.d.ts', declarations(layout, kept.nets, memories, { lanes, mayEnd })],
    // TypeScript looks for the types of `model.mjs` under this name.
    ['model.d.mts', "export * from './model.js';\n"],
    ['example.mjs', example],
  ]);
  for (const [name, content] of files) folder.write(name, content);
  const { onProgress } = request;
  const check = await checkPackage(folder.path, {
    design,
    kept,
    resets,
    lanes,
    ...(onProgress && { onProgress }),
  });
  const printed = await outputOf(join(folder.path, 'example.mjs'));
  const add = (name: string, content: string): void => {
    files.set(name, content);
    folder.write(name, content);
  };
  const { nets } = kept;
  const facts = { layout, lanes, resets, nets, memories, keepNames, paces: reading.clock ?? [] };
  add('README.md', readmeText({ ...facts, example, printed, npmName: npmName?.name }));
  if (npmName)
    add('package.json', packageJsonText(npmName, layout.name, [...files.keys(), 'manifest.json']));
  const about = {
    model: layout.name,
    tool: { name: 'clockstride', version } as const,
    netlist,
    sources,
    options: {
      ...reading,
      keepNames,
      unknown: layout.threeValued,
      lanes,
      ...(npmName && { name: npmName.name }),
    },
    resets,
    keptNets: kept.nets.length,
    check,
  };
  folder.write('manifest.json', manifestText(about, layout, files));
  const { output, page } = request;
  const summary: PackSummary = {
    model: layout.name,
    ...(output !== undefined && { output }),
    ...(page !== undefined && { page }),
    keptNets: kept.nets.length,
    files: Object.fromEntries(
      Array.from(files, ([name, content]) => [name, Buffer.byteLength(content)]),
    ),
    check,
  };
  const registers = layout.stateNames.length;
  const pageOf = () =>
    pageText(module, identity, { version, gates: gateCount(circuit), registers, resets });
  return { summary, pageOf };
}

// As `inspect` counts them.
const gateCount = ({ kind }: Circuit): number =>
  kind.reduce((count, each) => count + Number(isGate(each)), 0);

/** What an example prints; it runs as a reader would run it. */
async function outputOf(example: string): Promise<string> {
  try {
    const { stdout } = await promisify(execFile)(process.execPath, [example]);
    return stdout;
  } catch (error) {
    // A netlist may well come to a cycle without result with the first inputs that one tries.
    const { stdout, stderr } = error as { stdout?: string; stderr?: string };
    const fault = /^RunFault: .*$/m.exec(stderr ?? '');
    if (fault === null) throw error;
    return `${stdout}${fault[0]}\n`;
  }
}
