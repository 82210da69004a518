/** A field of a table as RFC 4180 writes it. */
export const quoted = (field: string): string =>
  /[",\r\n]/.test(field) ? `"${field.replaceAll('"', '""')}"` : field;
