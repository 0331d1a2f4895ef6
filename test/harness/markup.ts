/** A strict look at a page of this project: every tag closed in order, attributes quoted and not repeated. */

const VOID = new Set(["meta", "br"]);

export interface Page {
  /** Tag names in order of opening. */
  readonly tags: readonly string[];
  /** Text outside tags and style, entities resolved. */
  readonly text: string;
  readonly attributes: readonly (readonly [tag: string, name: string, value: string])[];
}

/** @throws {Error} that tells what is not well formed and where */
export function parsedPage(html: string): Page {
  const open: string[] = [];
  const tags: string[] = [];
  const attributes: [string, string, string][] = [];
  let text = "";
  let at = 0;
  const fail = (what: string): never => {
    throw new Error(`${what} at ${at}: …${html.slice(Math.max(0, at - 60), at + 60)}…`);
  };
  while (at < html.length) {
    const next = html.indexOf("<", at);
    const piece = html.slice(at, next < 0 ? html.length : next);
    if (open.at(-1) !== "style") {
      if (piece.includes(">")) fail("a bare > in text");
      if (/&(?!(amp|lt|gt|quot|#39);)/.test(piece)) fail("a bare & in text");
      text += resolved(piece);
    }
    if (next < 0) break;
    at = next;
    const end = html.indexOf(">", at);
    if (end < 0) fail("a tag without end");
    const tag = html.slice(at + 1, end);
    at = end + 1;
    if (/^!doctype html$/i.test(tag)) continue;
    if (tag.startsWith("/")) {
      const closed = open.pop();
      if (closed !== tag.slice(1)) fail(`</${tag.slice(1)}> closes <${closed}>`);
      text += " ";
      continue;
    }
    const name = /^[a-z][a-z0-9]*/i.exec(tag)?.[0] ?? fail(`a tag <${tag}>`);
    const selfClosed = tag.endsWith("/");
    const seen = new Set<string>();
    const rest = tag
      .slice(name.length, selfClosed ? -1 : undefined)
      .replace(/\s([\w:-]+)="([^"<>]*)"/g, (_, key, value) => {
        if (seen.has(key)) fail(`attribute ${key} twice`);
        seen.add(key);
        if (/&(?!(amp|lt|gt|quot|#39);)/.test(value)) fail("a bare & in an attribute");
        attributes.push([name, key, resolved(value)]);
        return "";
      });
    if (rest.trim() !== "") fail(`attributes ${rest}`);
    tags.push(name);
    if (!selfClosed && !VOID.has(name)) open.push(name);
  }
  if (open.length > 0) fail(`never closed: ${open.join(" > ")}`);
  return {tags, text, attributes};
}

const NAMED: Readonly<Record<string, string>> = {amp: "&", lt: "<", gt: ">", quot: '"', "#39": "'"};
const resolved = (text: string): string => text.replace(/&([a-z#0-9]+);/g, (_, name) => NAMED[name]!);
