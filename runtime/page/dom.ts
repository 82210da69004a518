type Child = Node | string;

type Attributes = Readonly<Record<string, string | number | boolean | undefined>>;

/** Makes an element. An attribute that is true stands without a value, false or undefined not at all. */
export function element<Tag extends keyof HTMLElementTagNameMap>(
  tag: Tag,
  attributes: Attributes = {},
  ...children: readonly Child[]
): HTMLElementTagNameMap[Tag] {
  const made = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) {
    if (value === true) made.setAttribute(name, '');
    else if (value !== undefined && value !== false) made.setAttribute(name, String(value));
  }
  made.append(...children);
  return made;
}

/** A button that does something. */
export function button(
  text: string,
  onClick: () => void,
  attributes: Attributes = {},
): HTMLButtonElement {
  const made = element('button', { type: 'button', ...attributes }, text);
  made.addEventListener('click', onClick);
  return made;
}

/** Sets a text only where it is another one: what is the same costs no layout. */
export function setText(target: Element, text: string): void {
  if (target.textContent !== text) target.textContent = text;
}

/** Hands a text or bytes to the user as a file. */
export function offerFile(name: string, parts: BlobPart[], type: string): void {
  const address = URL.createObjectURL(new Blob(parts, { type }));
  element('a', { href: address, download: name }).click();
  // The browser reads it after the click has been handled.
  setTimeout(() => URL.revokeObjectURL(address), 10_000);
}

let last = 0;

/** An identifier that no other element of the page has. */
export const freshId = (): string => `e${++last}`;
