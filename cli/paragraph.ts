/** Running text broken between words. */

/**
 * @param first what stands before the first line; the others are indented by `indent`
 * @param width characters in a line; a longer word stands alone
 */
export function paragraph(first: string, text: string, width: number, indent = "  "): string {
  const lines: string[] = [];
  let line = first;
  let bare = true;
  for (const word of text.split(/\s+/).filter((part) => part !== "")) {
    if (!bare && line.length + 1 + word.length > width) {
      lines.push(line);
      line = indent + word;
    } else line += bare ? word : ` ${word}`;
    bare = false;
  }
  lines.push(line);
  return `${lines.join("\n")}\n`;
}
