import type { Desk, View } from '../desk.js';
import { button, element, offerFile, setText } from '../dom.js';
import { responseCsv, valueChangeDump } from '../exports.js';
import { fragmentOf } from '../link.js';
import { stimulusOf } from '../stimulus.js';

/** Characters of an address that all of today's browsers keep whole. */
const MOST_ADDRESS = 65_536;

/** Stimulus in, response, waveforms, state and link out. */
export function files(desk: Desk): View {
  const chosen = element('input', { type: 'file', accept: '.csv,.json,text/csv', hidden: true });
  const take = async (file: File | undefined): Promise<void> => {
    if (file === undefined) return;
    takeFile(desk, file.name, await file.text());
  };
  chosen.addEventListener('change', async () => {
    await take(chosen.files?.[0]);
    chosen.value = '';
  });
  acceptDrops(document.documentElement, take);
  const state = element('p', {});
  const release = button('Give the inputs back', () => {
    desk.session.drive(undefined);
    desk.refresh();
  });
  const { name } = desk.session.model;
  const offer = (ending: string, text: () => string, type: string) => (): void =>
    offerFile(`${name}.${ending}`, [text()], type);
  const root = element(
    'section',
    { 'aria-labelledby': 'files' },
    element('h2', { id: 'files' }, 'Files'),
    element(
      'div',
      { class: 'drop' },
      element('span', {}, 'Drop a stimulus table (CSV) or a saved state (JSON) anywhere, or'),
      button('Choose a file', () => chosen.click()),
      chosen,
    ),
    state,
    release,
    element(
      'div',
      { class: 'group' },
      button(
        'Response CSV',
        offer('csv', () => responseCsv(desk.session), 'text/csv'),
      ),
      button(
        'Waveforms VCD',
        offer('vcd', () => valueChangeDump(desk.session), 'text/plain'),
      ),
      button(
        'State JSON',
        offer('json', () => JSON.stringify(desk.session.model.save()), 'application/json'),
      ),
      button('Link to this moment', () => void copyLink(desk)),
    ),
    element(
      'p',
      { class: 'quiet' },
      `Tables hold the last ${desk.session.recording.capacity.toLocaleString('en-US')} cycles at most.`,
    ),
  );
  return {
    root,
    update: () => {
      const { stimulus, isDriven, model, stimulusStart } = desk.session;
      release.hidden = stimulus === undefined;
      const row = stimulus ? Math.min(model.cycle - stimulusStart, stimulus.cycles) : 0;
      const how = isDriven ? 'drives the inputs' : 'is over; its last values hold';
      setText(
        state,
        stimulus ? `${stimulus.name}, cycle ${row} of ${stimulus.cycles}: ${how}.` : '',
      );
    },
  };
}

function takeFile(desk: Desk, name: string, text: string): void {
  try {
    if (/^\s*\{/.test(text)) {
      desk.session.restore(text);
      desk.say(`${name}: now at cycle ${desk.session.model.cycle.toLocaleString('en-US')}.`);
    } else {
      const { model, recording } = desk.session;
      const stimulus = stimulusOf(name, text, model.inputs, recording.shape);
      desk.session.drive(stimulus);
      desk.say(`${name} drives the inputs for ${stimulus.cycles.toLocaleString('en-US')} cycles.`);
    }
  } catch (error) {
    desk.say(error instanceof Error ? error.message : String(error), true);
  }
  desk.refresh();
}

function acceptDrops(target: HTMLElement, take: (file: File | undefined) => Promise<void>): void {
  target.addEventListener('dragover', (event) => {
    event.preventDefault();
    target.classList.add('dropping');
  });
  target.addEventListener('dragleave', () => target.classList.remove('dropping'));
  target.addEventListener('drop', (event) => {
    event.preventDefault();
    target.classList.remove('dropping');
    void take(event.dataTransfer?.files[0]);
  });
}

async function copyLink(desk: Desk): Promise<void> {
  const { model, shown } = desk.session;
  const fragment = await fragmentOf({ state: model.save(), shown });
  const length = location.href.replace(/#.*/, '').length + fragment.length;
  if (length > MOST_ADDRESS) {
    const size = length.toLocaleString('en-US');
    desk.say(`An address of this moment would have ${size} characters: download its state.`, true);
    return;
  }
  history.replaceState(undefined, '', fragment);
  try {
    await navigator.clipboard.writeText(location.href);
    desk.say('The address of this moment is copied, and stands in the address bar.');
  } catch {
    desk.say('The address of this moment stands in the address bar.');
  }
}
