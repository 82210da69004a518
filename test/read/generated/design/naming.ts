/** Words that are keywords of Verilog, and so names only if escaped. */
const keywords = ['wire', 'table', 'begin', 'config', 'reg'];

/**
 * A name for the thing with a number, in one of eight styles: three plain ones, and five that need
 * a backslash. No two numbers have a common name in any styles.
 */
export function nameOf(letter: string, number: number, style: number): string {
  const plain = `${letter}${number}`;
  switch (style) {
    case 1:
      return `_${plain}_Q`;
    case 2:
      return `${plain}$x`;
    case 3:
      return `u${number}/${letter}[${number}]`;
    case 4:
      return number < keywords.length ? keywords[number]! : `${keywords[0]}-${plain}`;
    case 5:
      return `${number}${letter}`;
    case 6:
      return `${letter}.${number}"`;
    case 7:
      return `ä${plain}//`;
    default:
      return plain;
  }
}

/** Whether a name is a simple identifier (IEEE 1364-2005, clause 3.7) and no keyword. */
export const isSimple = (name: string): boolean =>
  /^[A-Za-z_][A-Za-z0-9_$]*$/.test(name) && !keywords.includes(name);
