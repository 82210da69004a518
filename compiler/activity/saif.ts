import { indexText } from '../circuit/hierarchy.js';
import { ByteText } from '../waveform/byteText.js';
import { scopesOf } from '../waveform/scopeTree.js';
import { signalAt } from '../waveform/signalList.js';
import type { NetActivity } from './netActivity.js';

/**
 * Activity as a backward SAIF file (switching activity interchange format, version 2.0, IEEE 1801).
 *
 * A unit of time is that of our value change dumps. The file has no date: equal runs give equal
 * bytes. A run without delays has no glitches, so IG is 0.
 */
export function* saif(
  activity: NetActivity,
  version: string,
): Generator<Uint8Array, void, undefined> {
  const { design, list } = activity;
  const { name, hierarchy } = design.circuit;
  const text = new ByteText();
  text.text(
    '(SAIFILE\n(SAIFVERSION "2.0")\n(DIRECTION "backward")\n' +
      `(DESIGN "${name.replace(/["\\]/g, '\\$&')}")\n` +
      `(DATE "")\n(VENDOR "")\n(PROGRAM_NAME "Clockstride")\n(VERSION "${version}")\n` +
      `(DIVIDER / )\n(TIMESCALE 1 ns)\n(DURATION ${activity.duration})\n`,
  );
  const scopes = scopesOf(hierarchy, list);
  // Scopes that are entered and left, the next one last; left ones are inverted.
  const agenda = [{ scope: 0, depth: 0 }];
  for (let next = agenda.pop(); next !== undefined; next = agenda.pop()) {
    const { scope, depth } = next;
    const indent = ' '.repeat(2 * depth);
    if (scope < 0) {
      text.text(`${indent})\n`);
      continue;
    }
    text.text(`${indent}(INSTANCE ${word(hierarchy.scopeNames.at(scope)!)}\n`);
    const entries = scopes.entries(scope);
    if (entries.length > 0) text.text(`${indent}  (NET\n`);
    for (const entry of entries) {
      yield* nets(activity, entry, `${indent}    `, text);
    }
    if (entries.length > 0) text.text(`${indent}  )\n`);
    agenda.push({ scope: ~scope, depth });
    for (const child of scopes.children(scope)) agenda.push({ scope: child, depth: depth + 1 });
    if (text.isPiece) yield text.take();
  }
  text.text(')\n');
  yield text.take();
}

function* nets(activity: NetActivity, entry: number, indent: string, text: ByteText) {
  const { list, design } = activity;
  const signal = signalAt(design.circuit.hierarchy, list.scope[entry]!, list.signal[entry]!);
  for (let bit = 0; bit < list.width[entry]!; bit++) {
    const index = indexText(signal, list.low[entry]! + bit);
    const counts = activity.counts(list.place[entry]! + bit);
    const { toggles, timeAt0, timeAt1, timeAtX } = counts;
    text.text(
      `${indent}(${word(signal.name + index)} (T0 ${timeAt0}) (T1 ${timeAt1}) (TX ${timeAtX}) ` +
        `(TC ${toggles}) (IG 0))\n`,
    );
    if (text.isPiece) yield text.take();
  }
}

// What is neither letter, digit nor underscore is escaped, the brackets of an index too.
const word = (name: string): string => name.replace(/[^A-Za-z0-9_]/g, '\\$&');
