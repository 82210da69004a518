import { createHash } from 'node:crypto';
import type { PackageIdentity } from '../../runtime/model/identity.js';
import type { About } from '../../runtime/page/session.js';
import { bundledText } from './runtimeTexts.js';

/**
 * One HTML file that holds a model and everything to work with it: it opens from a disk, and its
 * own policy keeps it from fetching anything.
 */
export function pageText(module: Uint8Array, identity: PackageIdentity, about: About): string {
  const script = `const CLOCKSTRIDE_PACKAGE = ${inScript(identity)};\n${bundledText('page.js')}`;
  const style = bundledText('page.css');
  if (/<\/(script|style)/i.test(script + style)) throw new Error('the page would end in its text');
  const policy =
    `default-src 'none'; script-src 'wasm-unsafe-eval' '${hashOf(script)}'; ` +
    `style-src '${hashOf(style)}'; img-src data:; base-uri 'none'; form-action 'none'`;
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="${policy}">
<link rel="icon" href="data:,">
<title>${escaped(identity.name)}</title>
<style>${style}</style>
</head>
<body>
<div id="app"><p>The model is being loaded.</p></div>
<noscript><p>The model runs in this page, which takes JavaScript.</p></noscript>
<script type="application/json" id="about">${inScript(about)}</script>
<script type="text/plain" id="module">${Buffer.from(module).toString('base64')}</script>
<script type="module">${script}</script>
</body>
</html>
`;
}

const hashOf = (text: string): string =>
  `sha256-${createHash('sha256').update(text).digest('base64')}`;

// Names may hold anything, even what would end the script.
const inScript = (value: unknown): string => JSON.stringify(value).replaceAll('<', '\\u003c');

const escaped = (text: string): string =>
  text.replace(/[<>&"]/g, (character) => `&#${character.charCodeAt(0)};`);
