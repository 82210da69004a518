import { indexText } from '../circuit/hierarchy.js';
import { ByteText } from '../waveform/byteText.js';
import { quoted } from '../waveform/quoted.js';
import { signalAt, signalPath } from '../waveform/signalList.js';
import type { NetActivity } from './netActivity.js';

/**
 * Activity as comma-separated values (RFC 4180): a row for each bit of each signal of the list, by
 * its hierarchical name.
 */
export function* activityTable(activity: NetActivity): Generator<Uint8Array, void, undefined> {
  const { list, design } = activity;
  const { hierarchy } = design.circuit;
  const text = new ByteText();
  text.text('net,toggles,time_at_0,time_at_1,time_at_x\n');
  for (let entry = 0; entry < list.count; entry++) {
    const signal = signalAt(hierarchy, list.scope[entry]!, list.signal[entry]!);
    const path = signalPath(hierarchy, list, entry);
    for (let bit = 0; bit < list.width[entry]!; bit++) {
      const index = indexText(signal, list.low[entry]! + bit);
      const counts = activity.counts(list.place[entry]! + bit);
      const { toggles, timeAt0, timeAt1, timeAtX } = counts;
      text.text(`${quoted(path + index)},${toggles},${timeAt0},${timeAt1},${timeAtX}\n`);
      if (text.isPiece) yield text.take();
    }
  }
  yield text.take();
}
