import { Char } from './characters.js';
import type { Place } from './conditionals.js';
import { readBetween, readLine, readWord } from './directiveText.js';
import { currentVersion, reservedWords } from './keywords.js';
import type { Scanner } from './scan.js';
import type { NetType } from './syntax.js';

/** What directives set for the modules after them. */
export interface Settings {
  /** `default_nettype`; undefined for `none`. */
  defaultNetType: NetType | undefined;
  /** Within `celldefine` … `endcelldefine`. */
  isCell: boolean;
  /** `unconnected_drive`. */
  unconnectedDrive: 0 | 1 | undefined;
  /** Versions of the `begin_keywords` that are open. */
  readonly versions: string[];
}

/** The settings at the start of a reading and after `resetall` (clause 19). */
export function initialSettings(): Settings {
  return { defaultNetType: 'wire', isCell: false, unconnectedDrive: undefined, versions: [] };
}

type Problem = (message: string, place: Place) => void;
type SettingDirective = (
  settings: Settings,
  tokens: Scanner,
  place: Place,
  problem: Problem,
) => void;

const netTypes: ReadonlySet<string> = new Set<NetType>([
  ...(['wire', 'tri', 'wand', 'wor', 'triand', 'trior', 'tri0', 'tri1', 'trireg'] as const),
  'uwire',
]);

const skipLine: SettingDirective = (_settings, tokens) => {
  readLine(tokens);
};

// Not in IEEE 1364, but in cell libraries as they are shipped (common practice): words without
// arguments about faults, the speed of a simulation and the names of gates.
const practice = [
  ...['suppress_faults', 'nosuppress_faults', 'enable_portfaults', 'disable_portfaults'],
  ...['accelerate', 'noaccelerate', 'expand_vectornets', 'noexpand_vectornets'],
  ...['autoexpand_vectornets', 'remove_gatenames', 'noremove_gatenames', 'remove_netnames'],
  ...['noremove_netnames', 'protect', 'endprotect'],
];

/** Directives that set something, or nothing that a zero-delay model needs, by name. */
export const settingDirectives: ReadonlyMap<string, SettingDirective> = new Map([
  [
    'celldefine',
    (settings) => {
      settings.isCell = true;
    },
  ],
  [
    'endcelldefine',
    (settings) => {
      settings.isCell = false;
    },
  ],
  ['default_nettype', setDefaultNetType],
  [
    'resetall',
    (settings) => {
      Object.assign(settings, { ...initialSettings(), versions: settings.versions });
    },
  ],
  ['unconnected_drive', setUnconnectedDrive],
  [
    'nounconnected_drive',
    (settings) => {
      settings.unconnectedDrive = undefined;
    },
  ],
  ['begin_keywords', beginKeywords],
  ['end_keywords', endKeywords],
  ['timescale', skipTimescale],
  ['line', skipLine],
  ['pragma', skipLine],
  // Annex D: timing only.
  ['default_decay_time', skipLine],
  ['default_trireg_strength', skipLine],
  ['delay_mode_distributed', skipLine],
  ['delay_mode_path', skipLine],
  ['delay_mode_unit', skipLine],
  ['delay_mode_zero', skipLine],
  ...practice.map((name) => [name, () => {}]),
] as [string, SettingDirective][]);

function setDefaultNetType(
  settings: Settings,
  tokens: Scanner,
  place: Place,
  problem: Problem,
): void {
  const word = readWord(tokens);
  if (word === 'none') settings.defaultNetType = undefined;
  else if (netTypes.has(word)) settings.defaultNetType = word as NetType;
  else problem("'`default_nettype' needs a net type, such as wire, or none", place);
}

function setUnconnectedDrive(
  settings: Settings,
  tokens: Scanner,
  place: Place,
  problem: Problem,
): void {
  const word = readWord(tokens);
  if (word === 'pull0') settings.unconnectedDrive = 0;
  else if (word === 'pull1') settings.unconnectedDrive = 1;
  else problem("'`unconnected_drive' needs pull0 or pull1", place);
}

function beginKeywords(settings: Settings, tokens: Scanner, place: Place, problem: Problem): void {
  const version = readBetween(tokens, Char.Quote, Char.Quote) ?? '';
  const reserved = reservedWords(version);
  if (reserved === undefined) {
    problem(
      `'\`begin_keywords' names the version "${version}"; IEEE 1364-2005 Verilog is read, ` +
        'with the versions "1364-1995", "1364-2001", "1364-2001-noconfig" and "1364-2005"',
      place,
    );
  }
  settings.versions.push(reserved === undefined ? currentVersion : version);
  if (reserved !== undefined) tokens.reserved = reserved;
}

function endKeywords(settings: Settings, tokens: Scanner, place: Place, problem: Problem): void {
  if (settings.versions.pop() === undefined) {
    problem("'`end_keywords' has no '`begin_keywords' before it", place);
  }
  tokens.reserved = reservedWords(settings.versions.at(-1) ?? currentVersion)!;
}

/** `timescale` number unit `/` number unit, with white space allowed everywhere. */
function skipTimescale(_settings: Settings, tokens: Scanner, place: Place, problem: Problem): void {
  let isRight = isTime(tokens);
  tokens.skipBlank(true);
  isRight &&= tokens.text[tokens.at] === Char.Slash;
  if (isRight) {
    tokens.at++;
    isRight = isTime(tokens);
  }
  if (!isRight) {
    problem("'`timescale' needs a unit and a precision, such as 1ns / 1ps", place);
    readLine(tokens);
  }
}

function isTime(tokens: Scanner): boolean {
  tokens.skipBlank(true);
  const magnitude = readWord(tokens);
  if (/^10{0,2}$/.test(magnitude)) {
    tokens.skipBlank(true);
    return /^([munpf]?s)$/.test(readWord(tokens));
  }
  return /^10{0,2}[munpf]?s$/.test(magnitude);
}
