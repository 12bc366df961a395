// The page's own words. English text is the key; the host sends translations with the first reply.

let translations: Readonly<Record<string, string>> = {};

/** Takes the translations that the host knows, by English text. */
export function setWords(words: Readonly<Record<string, string>>): void {
  translations = words;
}

/** The text in the user's language, with `{name}` filled in from `values`. */
export function t(english: string, values: Readonly<Record<string, string | number>> = {}): string {
  const text = translations[english] ?? english;
  return text.replace(/\{(\w+)\}/g, (whole, name: string) => String(values[name] ?? whole));
}
