import type { DiagnosticCode } from '../../../diagnostics/codes.js';
import { listed } from '../../listed.js';
import type { NameId } from '../../names.js';
import type { ModuleSyntax } from '../syntax.js';
import type { Design } from './design.js';

/** How many names a message lists. */
const MAX_LISTED = 20;

/**
 * Chooses the top module: the one that is asked for, or the one that no other instantiates.
 *
 * Where several are left, library cells (`celldefine`) do not count, and then modules without
 * instances of modules do not. Undefined after a report.
 */
export function chooseTop(design: Design, wanted: string | undefined): ModuleSyntax | undefined {
  if (design.modules.length === 0) {
    report(design, 'top-unknown', 'the files define no module; name a file with one');
    return undefined;
  }
  if (wanted !== undefined) return namedTop(design, wanted);
  const { used, parents } = instantiations(design);
  // A name that two modules have is reported by itself.
  const seen = new Set(used);
  const unused = design.modules.filter(({ name }) => !seen.has(name) && seen.add(name));
  const noBoxes = unused.filter(({ name }) => !design.blackBoxes.has(name));
  const roots = noBoxes.length === 0 ? unused : noBoxes;
  const noCells = roots.filter((module) => !module.isCell);
  const choices = noCells.length === 0 ? roots : noCells;
  const holders = choices.filter(({ name }) => parents.has(name));
  const [top, ...others] = holders.length === 1 ? holders : choices;
  if (top !== undefined && others.length === 0) return top;
  reportTie(design, choices);
  return undefined;
}

function namedTop(design: Design, wanted: string): ModuleSyntax | undefined {
  const found = design.modules.find(({ name }) => design.text(name) === wanted);
  if (found !== undefined) return found;
  const { used } = instantiations(design);
  const roots = design.modules.filter(({ name }) => !used.has(name));
  const known = listOf(design, roots.length > 0 ? roots : design.modules);
  report(design, 'top-unknown', `no module is called ${wanted}; there is ${known}`);
  return undefined;
}

/** Reports what is wrong with all of the files, at the start of the first. */
function report({ diagnostics, sources }: Design, code: DiagnosticCode, message: string): void {
  const [source] = sources.sources;
  diagnostics.add(code, message, source && { source, start: 0, end: 0 });
}

/** Names that some other module instantiates, and modules that instantiate any module. */
function instantiations(design: Design): {
  readonly used: ReadonlySet<NameId>;
  readonly parents: ReadonlySet<NameId>;
} {
  const used = new Set<NameId>();
  const parents = new Set<NameId>();
  for (const { name, instances } of [...design.modules, ...design.dropped]) {
    for (let instance = 0; instance < instances.count; instance++) {
      const child = instances.module(instance);
      // A module may instantiate itself with other parameters.
      if (child < 0 || child === name || design.isPrimitive(child)) continue;
      used.add(child);
      parents.add(name);
    }
  }
  return { used, parents };
}

function reportTie(design: Design, choices: readonly ModuleSyntax[]): void {
  if (choices.length === 0) {
    const all = listOf(design, design.modules);
    const message = `every module is instantiated by another (${all}); choose one with --top NAME`;
    report(design, 'top-ambiguous', message);
    return;
  }
  const message = `no module instantiates ${listOf(design, choices)}; choose one with --top NAME`;
  const [first, ...others] = choices.slice(0, MAX_LISTED).map((module) => ({
    message: `${design.text(module.name)} is here`,
    span: design.wordSpan(module.nameStart),
  }));
  design.diagnostics.add('top-ambiguous', message, first!.span, others);
}

function listOf(design: Design, modules: readonly ModuleSyntax[]): string {
  return listed(
    modules.map(({ name }) => design.text(name)),
    MAX_LISTED,
  );
}
