/** What a reader of a simultaneous band should know about it. */
import type {BandSolver} from "../inverse/simultaneous.ts";
import {type Notice, remark} from "../notice.ts";

/** @param tally of the band; undefined where there is none */
export function remarksOnBand(tally: ReturnType<BandSolver["tally"]> | undefined): Notice[] {
  if (tally === undefined) return [];
  const remarks = [
    remark(
      "band/averages",
      "On the boundary a point has no bound at all, however good the readings: there the simultaneous band is of averages over the resolution length.",
    ),
  ];
  const {asked, boundAlone} = tally;
  if (boundAlone > 0)
    remarks.push(
      remark(
        "band/bound-alone",
        `For ${boundAlone} of the ${asked} numbers in the simultaneous band the readings add nothing: it is what the bound alone allows.`,
      ),
    );
  return remarks;
}
