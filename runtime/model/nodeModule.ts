/** A module of Node by its name. Bundlers for the web find no import of it and look for none. */
export const nodeModule = <T>(name: string): Promise<T> =>
  import(/* @vite-ignore */ /* webpackIgnore: true */ `node:${name}`);
