import { longestValue, writeValue } from '../../runtime/valueText.js';
import { ByteText } from './byteText.js';
import { quoted } from './quoted.js';
import { signalName } from './signalList.js';
import type { WaveForm, WaveRequest, WaveRows, WaveSink } from './wave.js';

const COMMA = 0x2c;
const LF = 0x0a;

/**
 * Waves as comma-separated values (RFC 4180): `cycle`, then the signals in the order of the list,
 * with values as in a response table.
 */
export const tableForm: WaveForm = (request) => new TableSink(request);

class TableSink implements WaveSink {
  readonly #request: WaveRequest;
  readonly #text = new ByteText();

  constructor(request: WaveRequest) {
    this.#request = request;
  }

  *start(): Generator<Uint8Array, void, undefined> {
    const { design, list } = this.#request;
    this.#text.text('cycle');
    for (let entry = 0; entry < list.count; entry++) {
      this.#text.text(`,${quoted(signalName(design.circuit.hierarchy, list, entry))}`);
      if (this.#text.isPiece) yield this.#text.take();
    }
    this.#text.byte(LF);
  }

  *rows({ firstCycle, cycles, rows, place }: WaveRows): Generator<Uint8Array, void, undefined> {
    const { list } = this.#request;
    for (let row = 0; row < cycles; row++) {
      const at = row * place.stride + place.firstWord;
      const unknownAt = place.toUnknown === undefined ? undefined : at + place.toUnknown;
      this.#text.text(`${firstCycle + row}`);
      for (let entry = 0; entry < list.count; entry++) {
        const range = { offset: list.place[entry]!, width: list.width[entry]! };
        this.#text.byte(COMMA);
        this.#text.with(longestValue(range.width), (bytes, to) =>
          writeValue(bytes, to, range, rows, at, unknownAt),
        );
        if (this.#text.isPiece) yield this.#text.take();
      }
      this.#text.byte(LF);
    }
    yield this.#text.take();
  }

  *end(): Generator<Uint8Array, void, undefined> {
    yield this.#text.take();
  }
}
