/** A command line as a shell reads it (POSIX.1), to be copied. */
export const shellText = (words: readonly string[]): string => words.map(shellWord).join(' ');

/** One word of it. */
export const shellWord = (word: string): string =>
  /^[\w@%+=:,./-]+$/.test(word) ? word : `'${word.replaceAll("'", "'\\''")}'`;
