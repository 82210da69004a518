/** A name to publish or install by, and a version. */
export interface NpmName {
  readonly name: string;
  readonly version: string;
}

const FIRST_VERSION = '1.0.0';

/** Reads `NAME` or `NAME@VERSION`. Undefined where it is no name of a package. */
export function npmNameOf(text: string): NpmName | undefined {
  const [, name, version = FIRST_VERSION] =
    /^((?:@[a-z0-9~-][a-z0-9._~-]*\/)?[a-z0-9~-][a-z0-9._~-]*)(?:@(\d+\.\d+\.\d+(?:-[\w.-]+)?))?$/.exec(
      text,
    ) ?? [];
  return name === undefined || name.length > 214 ? undefined : { name, version };
}

/** The text of `package.json`. */
export function packageJsonText(
  { name, version }: NpmName,
  model: string,
  files: string[],
): string {
  const content = {
    name,
    version,
    description: `The clocked circuit ${model} as a module.`,
    type: 'module',
    exports: {
      '.': { types: './model.d.ts', default: './model.mjs' },
      './model.mjs': { types: './model.d.ts', default: './model.mjs' },
      './model.wasm': './model.wasm',
      ...(files.includes('worker.mjs') && { './worker.mjs': './worker.mjs' }),
      './manifest.json': './manifest.json',
      './package.json': './package.json',
    },
    types: './model.d.ts',
    files: files.filter((file) => file !== 'package.json').sort(),
    sideEffects: files.includes('worker.mjs') ? ['./worker.mjs'] : false,
  };
  return `${JSON.stringify(content, null, 2)}\n`;
}
