import { fromBase64 } from '../model/base64.js';
import { compile } from '../model/source.js';
import { App } from './app.js';
import { viewIn } from './link.js';
import { type About, Session } from './session.js';

/** The text of one of the page's data blocks. */
const block = (id: string): string => document.getElementById(id)?.textContent ?? '';

async function start(target: HTMLElement): Promise<void> {
  const module = await compile(fromBase64(block('module').trim()));
  const app = new App(await Session.load(module, JSON.parse(block('about')) as About));
  app.mount(target);
  await followLink(app);
  window.addEventListener('hashchange', () => void followLink(app));
}

/** Goes to the moment that the address names. */
async function followLink(app: App): Promise<void> {
  try {
    const view = await viewIn(location.hash);
    if (view === undefined) return;
    app.session.restore(view.state);
    app.session.shown = view.shown.filter((name) => app.session.signal(name) !== undefined);
    app.say(`At cycle ${app.session.model.cycle.toLocaleString('en-US')}, as the address says.`);
  } catch (error) {
    const why = error instanceof Error ? error.message : String(error);
    app.say(`The address names a moment that cannot be shown: ${why}`, true);
  }
  app.refresh();
}

const target = document.getElementById('app')!;
start(target).catch((error) => {
  target.textContent = `This page does not work here: ${error}`;
});
