/** A request that cannot be served as it stands; the message says why and the way out. */
export class UsageError extends Error {}
