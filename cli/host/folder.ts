/** A folder and those above it, made where they are missing. */
import {mkdir, stat} from "node:fs/promises";
import {dirname, resolve} from "node:path";

const codeOf = (error: unknown): unknown => (error as NodeJS.ErrnoException).code;

const isFolder = (path: string): Promise<boolean> =>
  stat(path).then(
    (found) => found.isDirectory(),
    () => false,
  );

/**
 * Node's own recursive request never returns where a file system refuses a new folder as "not there"
 * although the folder above is (measured on /proc with Node 20); here that refusal is told.
 * @returns the uppermost folder that was made; undefined where all were there
 */
export async function makeFolder(path: string): Promise<string | undefined> {
  try {
    await mkdir(path);
    return path;
  } catch (error) {
    if (codeOf(error) === "EEXIST" && (await isFolder(path))) return undefined;
    const above = dirname(resolve(path));
    if (codeOf(error) !== "ENOENT" || (await isFolder(above))) throw error;
    const firstMade = await makeFolder(above);
    return (await makeFolder(path)) === undefined ? firstMade : (firstMade ?? path);
  }
}
