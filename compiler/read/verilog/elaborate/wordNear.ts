import type { Position } from '../../../diagnostics/sourceMap.js';
import type { NameId } from '../../names.js';
import type { ModuleBody } from './body.js';

/** How far a name may stand from the place on record: with blanks and comments between. */
const NEAR = 200;

// A character for each byte, so that offsets are the same.
const oneByteEach = new TextDecoder('latin1');

type Texts = Pick<ModuleBody, 'sources' | 'names' | 'wordAt'>;
const DOT = 46;

interface Stretch {
  readonly start: Position;
  readonly end: Position;
}

/**
 * Where a name stands next before a place, such as that of a port before what is connected to it;
 * the word at the place itself where it does not, because a macro has brought it in.
 */
export function wordBefore(texts: Texts, name: NameId, place: Position): Stretch {
  const { source, start } = texts.sources.span(place);
  // An empty connection stands where its dot does.
  if (source.bytes[start] === DOT) return wordFrom(texts, name, place);
  return wordIn(texts, name, place, -NEAR, 1) ?? texts.wordAt(place);
}

/** Where a name stands next from a place on, such as that of an instance behind its module. */
export function wordFrom(texts: Texts, name: NameId, place: Position): Stretch {
  return wordIn(texts, name, place, 0, NEAR) ?? texts.wordAt(place);
}

function wordIn(
  { sources, names }: Texts,
  name: NameId,
  place: Position,
  from: number,
  to: number,
): Stretch | undefined {
  const { source, start } = sources.span(place);
  const first = Math.max(0, start + from);
  const part = oneByteEach.decode(source.bytes.subarray(first, start + to));
  const { texts } = names;
  const word = oneByteEach.decode(texts.bytes.subarray(texts.start(name), texts.end(name)));
  const isWhole = (at: number): boolean =>
    !isNamePart(part[at - 1]) && !isNamePart(part[at + word.length]);
  const places: number[] = [];
  for (let at = part.indexOf(word); at >= 0 && word !== ''; at = part.indexOf(word, at + 1)) {
    if (isWhole(at)) places.push(at);
  }
  const at = from < 0 ? places.at(-1) : places[0];
  if (at === undefined) return undefined;
  const position = place - start + first + at;
  return { start: position, end: position + word.length };
}

const isNamePart = (character: string | undefined): boolean =>
  character !== undefined && /[\w$]/.test(character);
