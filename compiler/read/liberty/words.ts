/** The words of a text, separated by blanks, commas or `\` line ends. */
export function wordsOf(text: string): string[] {
  return text.split(/[\s,\\]+/).filter((word) => word !== '');
}
