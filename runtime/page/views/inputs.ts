import type { PortLayout } from '../../layout.js';
import type { Value } from '../../model/values.js';
import type { Desk, View } from '../desk.js';
import { button, element, freshId, setText } from '../dom.js';
import { shownValue, typedValue } from '../valueBase.js';
import { shownToggle } from './shownToggle.js';

/** More bits than these have no switch each. */
const MOST_SWITCHES = 8;
/** More bits than these have no buttons to count up and down. */
const MOST_COUNTED = 32;

interface Control {
  /** What stands behind the name. */
  readonly parts: readonly HTMLElement[];
  show(value: Value, isDriven: boolean): void;
}

/** The inputs, each with a control that fits it. */
export function inputPanel(desk: Desk): View {
  const { model } = desk.session;
  const driven = element('p', { class: 'note' });
  const rows = model.inputs.map((port) => {
    const control = controlFor(desk, port);
    const { root, update } = shownToggle(desk, port.name);
    return {
      port,
      control,
      update,
      root: element('div', { class: 'row' }, root, ...control.parts),
    };
  });
  const none = element('p', { class: 'quiet' }, 'There is no input.');
  const root = element(
    'section',
    { 'aria-labelledby': 'inputs' },
    element('h2', { id: 'inputs' }, 'Inputs'),
    driven,
    ...(rows.length > 0 ? rows.map((row) => row.root) : [none]),
  );
  return {
    root,
    update: () => {
      const { isDriven, stimulus } = desk.session;
      setText(driven, isDriven ? `driven by ${stimulus!.name}` : '');
      for (const { port, control, update } of rows) {
        control.show(model.read(port.name), isDriven);
        update();
      }
    },
  };
}

function controlFor(desk: Desk, port: PortLayout): Control {
  const set = (value: Value): void => {
    desk.session.write(port.name, value);
    desk.refresh();
  };
  if (port.width > 1) return wordControl(desk, port, set);
  return desk.session.threeValued ? bitChoice(port, set) : bitSwitch(desk, port, set);
}

function bitSwitch(desk: Desk, port: PortLayout, set: (value: Value) => void): Control {
  const toggle = switchFor(port.name, (isOn) => set(Number(isOn)));
  const reset = desk.session.about.resets.find(({ name }) => name === port.name);
  const pulse = (): void => {
    set(reset!.active);
    desk.step(2);
    set(1 - reset!.active);
    desk.say(`${port.name} was ${reset!.active} for two cycles.`);
  };
  const root = element('span', { class: 'control' }, toggle.root);
  const pulsing = button('pulse', pulse, { 'aria-label': `pulse ${port.name} for two cycles` });
  if (reset) root.append(pulsing);
  return {
    parts: [root],
    show: (value, isDriven) => {
      toggle.show(value === 1, isDriven);
      pulsing.disabled = isDriven;
    },
  };
}

function switchFor(name: string, onToggle: (isOn: boolean) => void) {
  let isNow = false;
  const toggle = (): void => {
    isNow = !isNow;
    onToggle(isNow);
  };
  const root = button('0', toggle, {
    role: 'switch',
    class: 'switch',
    'aria-label': name,
    'aria-checked': 'false',
  });
  const show = (isOn: boolean, isDisabled: boolean): void => {
    isNow = isOn;
    setText(root, isOn ? '1' : '0');
    if (root.getAttribute('aria-checked') !== `${isOn}`)
      root.setAttribute('aria-checked', `${isOn}`);
    root.disabled = isDisabled;
  };
  return { root, show };
}

/** 0, 1 or x, one of them. */
function bitChoice(port: PortLayout, set: (value: Value) => void): Control {
  const group = freshId();
  const choices = ([0, 1, 'x'] as const).map((value) => {
    const input = element('input', { type: 'radio', name: group, value });
    input.addEventListener('change', () => set(value));
    return { value, input, label: element('label', {}, input, `${value}`) };
  });
  const root = element(
    'span',
    { class: 'control bits', role: 'radiogroup', 'aria-label': port.name },
    ...choices.map(({ label }) => label),
  );
  return {
    parts: [root],
    show: (value, isDriven) => {
      for (const choice of choices) {
        choice.input.checked = choice.value === value;
        choice.input.disabled = isDriven;
      }
    },
  };
}

/** A field for the whole value, and switches for its bits where they are few. */
function wordControl(desk: Desk, port: PortLayout, set: (value: Value) => void): Control {
  const { name, width } = port;
  const hasX = desk.session.threeValued;
  const id = freshId();
  const field = element('input', { type: 'text', 'aria-label': name, spellcheck: 'false' });
  field.size = Math.min(34, Math.max(6, Math.ceil(width / 4) + 3));
  const problem = element('span', { id, class: 'problem' });
  // The value beside a text that was refused; undefined where none was.
  let kept: string | undefined;
  const accept = (text: string): void => {
    kept = undefined;
    field.value = text;
    field.removeAttribute('aria-invalid');
    field.removeAttribute('aria-describedby');
    setText(problem, '');
  };
  const refuse = (): void => {
    kept = shownValue(desk.session.model.read(name), width, desk.base);
    field.setAttribute('aria-invalid', 'true');
    field.setAttribute('aria-describedby', id);
    const form = `${name} takes ${width} bits, as in 12, 0x1f or 0b101${hasX ? ' or 0b1x0' : ''}`;
    setText(problem, `${form}; it is still ${kept}.`);
    desk.say(`${form}; it is still ${kept}.`, true);
  };
  const commit = (): void => {
    const value = typedValue(field.value, width, hasX);
    if (value === undefined) refuse();
    else {
      accept(shownValue(value, width, desk.base));
      set(value);
    }
  };
  field.addEventListener('change', commit);
  field.addEventListener('keydown', ({ key }) => {
    if (key === 'Escape') accept(shownValue(desk.session.model.read(name), width, desk.base));
  });
  const known = (value: Value): bigint => (typeof value === 'string' ? 0n : BigInt(value));
  const setBits = (bits: bigint): void => set(width <= 32 ? Number(bits) : bits);
  const move = (by: bigint): void => {
    setBits(BigInt.asUintN(width, known(desk.session.model.read(name)) + by));
  };
  const less = button('−', () => move(-1n), { 'aria-label': `${name} minus 1` });
  const more = button('+', () => move(1n), { 'aria-label': `${name} plus 1` });
  const bits = Array.from({ length: width <= MOST_SWITCHES ? width : 0 }, (_, i) => {
    const bit = width - 1 - i;
    const toggle = switchFor(`${name} bit ${bit}`, (isOn) => {
      const others = known(desk.session.model.read(name)) & ~(1n << BigInt(bit));
      setBits(others | (BigInt(isOn) << BigInt(bit)));
    });
    return { bit, ...toggle };
  });
  const control = element(
    'span',
    { class: width > MOST_COUNTED ? 'control wide' : 'control' },
    field,
    // Nobody counts through more than these.
    ...(width <= MOST_COUNTED ? [less, more] : []),
  );
  const switches = element('span', { class: 'switches' }, ...bits.map(({ root }) => root));
  return {
    parts: [control, ...(bits.length > 0 ? [switches] : []), problem],
    show: (value, isDriven) => {
      const text = shownValue(value, width, desk.base);
      const isEdited = document.activeElement === field || text === kept;
      if (!isEdited && field.value !== text) accept(text);
      for (const control of [field, less, more]) control.disabled = isDriven;
      for (const { bit, show } of bits) show(((known(value) >> BigInt(bit)) & 1n) === 1n, isDriven);
    },
  };
}
