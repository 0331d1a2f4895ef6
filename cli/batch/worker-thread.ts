/** What a thread runs: it opens the run by itself, and computes the lines that it is given by their places. */
import {workerData} from "piscina";
import {ReportableError} from "../../lib/errors.ts";
import {nodeHost} from "../host.ts";
import {mappedHost} from "../queue/folder-map.ts";
import {type Bench, benchFor} from "./bench.ts";
import {reopened} from "./opened-run.ts";
import {packedError} from "./packed-error.ts";
import {openParts} from "./parts.ts";
import type {ThreadAnswer, ThreadData} from "./pool.ts";

async function handler(): Promise<(index: number) => Promise<ThreadAnswer>> {
  const {request, out, run, folders} = workerData as ThreadData;
  const host = mappedHost(nodeHost(), folders ?? []);
  // The files stay open as long as the thread lives.
  const opening = new Promise<Bench>((opened, refused) => {
    reopened(host, request, run, (open) => {
      opened(benchFor(open, openParts(host, out)));
      return new Promise<never>(() => undefined);
    }).catch(refused);
  });
  opening.catch(() => undefined);
  return async (index) => {
    try {
      return {note: await (await opening).compute(index)};
    } catch (error) {
      // Between threads an error loses its class.
      if (error instanceof ReportableError) return {failure: packedError(error)};
      throw error;
    }
  };
}

export default handler();
