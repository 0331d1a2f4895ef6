/** The shell of a page: complete in one file, allowed to fetch nothing and to run nothing. */
import {escaped} from "./html.ts";
import {STYLE} from "./style.ts";

/** @param title plain text */
export const pageStart = (title: string): string =>
  [
    "<!doctype html>",
    '<html lang="en"><head><meta charset="utf-8">',
    `<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; img-src data:">`,
    '<meta name="viewport" content="width=device-width, initial-scale=1">',
    `<title>${escaped(title)}</title>`,
    `<style>${STYLE}</style></head><body>`,
    "",
  ].join("\n");

export const PAGE_END = "</body></html>\n";
