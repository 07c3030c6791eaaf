/** Returns a text from outside with what can't be printed, or turns the reading direction, replaced by a dot. */
export function printable(text: string): string {
  return text.replace(/[\p{Cc}\u202a-\u202e\u2066-\u2069\ufffe\uffff]|\p{Surrogate}/gu, '·')
}

/** Returns a text that is safe between tags and in quoted attributes of HTML and SVG. */
export function escapeMarkup(text: string): string {
  return printable(text).replace(/[&<>"']/g, (one) => `&#${one.charCodeAt(0)};`)
}
