/** What an interval rests on, in words; said wherever an interval is shown. */
import type {IntervalBasis} from "../inverse/nouns.ts";

export const INTERVAL_BASIS: Readonly<Record<IntervalBasis, {readonly lead: string; readonly text: string}>> = {
  "given-bound": {
    lead: "Given bound.",
    text: "The intervals take the bound on the source that was given with the settings. They cover as stated as long as that bound, the noise, the boundary and the support are right.",
  },
  "assumed-bound": {
    lead: "Assumed bound.",
    text: "No bound on the source was given: a rule chose the multiplier, and the intervals assume that the true source has at most twice the norm of the most likely one, and what could hide in the noise. That is an assumption, not something the data show; where it fails, the intervals are too narrow. Give --bound rms:V when you know how strong the sources can be.",
  },
};
