/** How much of a file is looked at. */
const LOOKED_AT = 4096;

const decoder = new TextDecoder();

/**
 * What keeps a file from being read as a text, with the way out; undefined where nothing does.
 *
 * Texts are in UTF-8, which plain ASCII is too, with line feeds at the ends of their lines.
 */
export function faultOfText(bytes: Uint8Array): string | undefined {
  const start = bytes.subarray(0, LOOKED_AT);
  const [first, second] = start;
  if ((first === 0xff && second === 0xfe) || (first === 0xfe && second === 0xff)) {
    return 'is a text in UTF-16; save it as UTF-8';
  }
  if (first === 0x1f && second === 0x8b) return 'is compressed by gzip; unpack it';
  if (first === 0x50 && second === 0x4b && start[2]! < 9) return 'is a ZIP archive; unpack it';
  const zeros = start.reduce((count, byte) => (byte === 0 ? count + 1 : count), 0);
  if (zeros > 0) {
    return isEveryOther(start, zeros)
      ? 'is a text in UTF-16; save it as UTF-8'
      : 'is no text, for it has zero bytes; name a netlist as text';
  }
  if (isUnprintable(start)) return 'is no text; name a netlist as text in UTF-8';
  const hasOnlyReturns = start.includes(CARRIAGE_RETURN) && !bytes.includes(LINE_FEED);
  if (hasOnlyReturns) {
    return 'ends its lines with carriage returns alone; let line feeds end them';
  }
  return undefined;
}

const LINE_FEED = 10;
const CARRIAGE_RETURN = 13;

/** Whether a zero stands beside nearly each byte, as in a text of ASCII characters in UTF-16. */
const isEveryOther = (bytes: Uint8Array, zeros: number): boolean => zeros > bytes.length * 0.4;

/** Whether a good part of some bytes are control characters, which no text has. */
function isUnprintable(bytes: Uint8Array): boolean {
  let controls = 0;
  for (const byte of bytes) if (byte < 9 || (byte > 13 && byte < 32) || byte === 127) controls++;
  return controls > 4 && controls * 20 > bytes.length;
}

/** What a text is by its first words. */
export type TextForm = 'verilog' | 'bench' | 'liberty' | 'vhdl' | 'markup';

const firstWords: readonly (readonly [TextForm, RegExp])[] = [
  [
    'verilog',
    /^(?:`(?:timescale|define|include|ifn?def|celldefine|resetall)\b|module\s+[\w\\]\S*\s*[(#;])/,
  ],
  ['liberty', /^library\s*\(/],
  ['bench', /^(?:INPUT|OUTPUT)\s*\(\s*[^\s()]+\s*\)/i],
  ['vhdl', /^(?:library\s+\w+\s*;|use\s+[\w.]+\s*;|entity\s+\w+\s+is\b)/i],
  ['markup', /^<(?:!doctype|html|\?xml)\b/i],
];

/** Tells a text's form by its first words; undefined where they could stand in any. */
export function formOfText(bytes: Uint8Array): TextForm | undefined {
  let text = decoder.decode(bytes.subarray(0, LOOKED_AT)).trimStart();
  for (;;) {
    const [comment] = /^(?:\/\/[^\n]*|#[^\n]*|--[^\n]*|\/\*[\s\S]*?\*\/)\s*/.exec(text) ?? [''];
    if (comment === '') break;
    text = text.slice(comment.length);
  }
  return firstWords.find(([, pattern]) => pattern.test(text))?.[0];
}
