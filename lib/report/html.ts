/** Text on its way into markup. Every name, path and message passes here. */

const ENTITIES: Readonly<Record<string, string>> = {
  "&": "&amp;",
  "<": "&lt;",
  ">": "&gt;",
  '"': "&quot;",
  "'": "&#39;",
};

/** What HTML does not allow even as an entity: controls but tab and line feed, lone surrogates, noncharacters. */
const UNPRINTABLE = /(?![\t\n])\p{Cc}|\p{Cs}|[\ufffe\uffff]/gu;

/** A text as content or as a quoted attribute. */
export const escaped = (text: string): string =>
  text.replace(UNPRINTABLE, "\ufffd").replace(/[&<>"']/g, (mark) => ENTITIES[mark]!);

/** Longest name that a page prints whole; a cell may hold megabytes. */
const LONGEST_NAME = 80;

/** A name of the user's, shortened for reading. */
export const nameText = (name: string): string =>
  escaped(name.length > LONGEST_NAME ? `${name.slice(0, LONGEST_NAME - 1)}…` : name);

/** A message for people, shortened where it quotes something endless; an option in it is not torn at its hyphens. */
export const messageText = (message: string): string =>
  escaped(message.length > 2000 ? `${message.slice(0, 2000)}…` : message).replace(
    /--[a-z][a-z-]*/g,
    (option) => `<span class="o">${option}</span>`,
  );
