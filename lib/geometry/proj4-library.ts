/**
 * proj4, loaded when coordinates are first transformed.
 *
 * `import` reads the whole text of a library of this form for the names it exports, before it is compiled, and takes
 * five times as long about it as `require` does about everything: 0.1 s of a start, with or without coordinates.
 */
import {createRequire} from "node:module";
import type proj4 from "proj4";

const load = createRequire(import.meta.url);

export const proj4Library = (): typeof proj4 => load("proj4");
