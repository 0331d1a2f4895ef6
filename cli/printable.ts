/** Text from files and options, made safe and short enough to print. */

// C0 and C1 controls could move the cursor or recolour the terminal, bidirectional marks could reorder what is read.
// biome-ignore lint/suspicious/noControlCharactersInRegex: they are what is looked for
const UNPRINTABLE = /[\u0000-\u0008\u000b-\u001f\u007f-\u009f\u200e\u200f\u202a-\u202e\u2066-\u2069]/g;

/** `text` with every control character but tab and line feed replaced by a visible sign, cut after `most` characters. */
export function printable(text: string, most = Number.POSITIVE_INFINITY): string {
  const short = text.length > most ? `${text.slice(0, most)}… (${text.length} characters)` : text;
  return short.replaceAll(UNPRINTABLE, "\ufffd");
}

/** A value as it stands in a message: quoted, on one line, at most 60 characters of it. */
export const shown = (text: string): string => `"${printable(text, 60).replaceAll(/[\t\n]/g, " ")}"`;
