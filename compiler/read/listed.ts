const MOST = 20;

/** Names for a message, separated by commas: `a, b and 7 more` where there are many. */
export function listed(names: readonly string[], most: number = MOST): string {
  const more = names.length - most;
  return names.slice(0, most).join(', ') + (more > 0 ? ` and ${more} more` : '');
}
