/** Where a queue is: `redis://host:port/db`, or `rediss://` for one behind TLS. */
import {InputError} from "../../lib/errors.ts";
import {shown} from "../printable.ts";

export interface QueueAddress {
  readonly url: string;
  /** Without name and password. */
  readonly shown: string;
}

/** @throws {InputError} `queue/not-an-address` */
export function queueAddress(text: string): QueueAddress {
  const wrong = (what: string): InputError =>
    new InputError(
      "queue/not-an-address",
      `--queue ${shown(withoutPassword(text))} ${what}. Give redis://host:port or redis://host:port/number, for example --queue redis://127.0.0.1:6379.`,
    );
  if (!URL.canParse(text)) throw wrong("is not an address");
  const {protocol, hostname, port, pathname, search, hash} = new URL(text);
  if (protocol !== "redis:" && protocol !== "rediss:") throw wrong("does not begin with redis:// or rediss://");
  if (hostname === "") throw wrong("names no machine");
  if (!/^(\/[0-9]{0,4})?$/.test(pathname) || search !== "" || hash !== "")
    throw wrong("has something else than the number of a database behind its machine");
  return {url: text, shown: `${protocol}//${hostname}${port === "" ? "" : `:${port}`}${pathname}`};
}

const withoutPassword = (text: string): string => text.replace(/\/\/.*@/, "//…@");
