/** What a refusal of the operating system means to the user, who is the one to act on it. */
import {type ErrorCode, InputError} from "../lib/errors.ts";

type Meaning = (path: string) => readonly [ErrorCode, string];

const NOTHING_KEPT = "choose another disk with --out; no result file was written.";

const noPermission: Meaning = (path) => [
  "host/no-permission",
  `Permission was refused for "${path}". Change its permissions, or choose another place.`,
];
const notAFolder: Meaning = (path) => [
  "host/not-a-folder",
  `"${path}" cannot be used as a folder: a file stands on the way. Choose another place, or move that file.`,
];

const MEANINGS: Readonly<Record<string, Meaning>> = {
  ENOENT: (path) => ["host/not-found", `There is no "${path}". Check the spelling and the folder it stands in.`],
  ENOSPC: (path) => [
    "host/disk-full",
    `The disk is full: "${path}" could not be written. Make room, or ${NOTHING_KEPT}`,
  ],
  EDQUOT: (path) => [
    "host/disk-full",
    `The disk quota is used up: "${path}" could not be written. Make room, or ${NOTHING_KEPT}`,
  ],
  EFBIG: (path) => [
    "host/file-too-large",
    `"${path}" outgrew the largest file allowed here. Raise the limit, or ${NOTHING_KEPT}`,
  ],
  EACCES: noPermission,
  EPERM: noPermission,
  EROFS: (path) => ["host/no-permission", `"${path}" is on a read-only disk. Choose another place.`],
  ENOTDIR: notAFolder,
  EEXIST: notAFolder,
  EISDIR: (path) => ["host/is-a-folder", `"${path}" is a folder. Name a file inside it.`],
};

/** Whether `error` comes from the operating system and not from a defect. */
function isRefusal(error: unknown): error is NodeJS.ErrnoException & {code: string} {
  return error instanceof Error && "syscall" in error && "code" in error && typeof error.code === "string";
}

/**
 * Runs one request to the operating system.
 * @param path as the user knows it; it stands in the message
 * @throws {InputError} `host/…` for what the operating system refuses; anything else passes through
 */
export async function asking<T>(path: string, request: () => Promise<T>): Promise<T> {
  try {
    return await request();
  } catch (error) {
    if (!isRefusal(error)) throw error;
    const [code, message] = MEANINGS[error.code]?.(path) ?? [
      "host/refused",
      `The operating system refused "${path}" (${error.code}). Check the disk and the path.`,
    ];
    throw new InputError(code, message, {place: {file: path}, cause: error});
  }
}
