/** Families of truths that coverage is measured on: in the ball ‖f‖ ≤ M, the worst in it, and outside it. */
import type {Random} from "../../lib/numeric/random.ts";
import {type FineNodes, inner, scaledTo} from "./fine-continuum.ts";

interface TruthQuestion {
  readonly nodes: FineNodes;
  /** What is asked, on the nodes, and what of it the readings miss. */
  readonly q: Float64Array;
  readonly missed: Float64Array;
  readonly bound: number;
}

export interface Family {
  readonly name: string;
  /** inside: at least the stated coverage; worst: that and no more; outside: the bound is wrong and no promise made. */
  readonly place: "inside" | "worst" | "outside";
  truth(question: TruthQuestion, random: Random): Float64Array;
}

/** Truths drawn of a random family; the one that misleads most of them is kept, since a mean over truths would hide it. */
const DRAWN = 100;

const worstDrawn =
  (shape: (question: TruthQuestion, random: Random) => Float64Array): Family["truth"] =>
  (question, random) => {
    let worst: Float64Array = new Float64Array();
    let most = -1;
    for (let k = 0; k < DRAWN; ++k) {
      const f = scaledTo(question.nodes, shape(question, random), question.bound);
      const wrong = Math.abs(inner(question.nodes, f, question.missed));
      if (wrong > most) [worst, most] = [f, wrong];
    }
    return worst;
  };

const along =
  (times: number): Family["truth"] =>
  ({nodes, missed, bound}) =>
    scaledTo(nodes, missed, times * bound);

export const FAMILIES: readonly Family[] = [
  {
    name: "white noise",
    place: "inside",
    truth: worstDrawn(({nodes}, random) => nodes.weight.map((w) => random.normal() / Math.sqrt(w))),
  },
  {
    name: "smooth",
    place: "inside",
    truth: worstDrawn(({nodes}, random) => {
      const [from, length] = [nodes.at[0], nodes.at[nodes.at.length - 1] - nodes.at[0]];
      const amplitude = Array.from({length: 25}, (_, k) => random.normal() / (1 + 0.2 * k));
      return nodes.at.map((t) =>
        amplitude.reduce((sum, a, k) => sum + a * Math.cos((Math.PI * k * (t - from)) / length), 0),
      );
    }),
  },
  {
    name: "spikes",
    place: "inside",
    truth: worstDrawn(({nodes}, random) => {
      const [from, length] = [nodes.at[0], nodes.at[nodes.at.length - 1] - nodes.at[0]];
      const spikes = Array.from({length: 3}, () => [from + length * random.uniform(), random.normal()]);
      // About 2 m wide, and never all zero on the nodes.
      return nodes.at.map((t) => spikes.reduce((sum, [at, a]) => sum + a * Math.exp(-(((t - at) / 2) ** 2)), 1e-9));
    }),
  },
  {name: "what is asked, as a source", place: "inside", truth: ({nodes, q, bound}) => scaledTo(nodes, q, bound)},
  {name: "worst, +", place: "worst", truth: along(1)},
  {name: "worst, −", place: "worst", truth: (...asked) => along(1)(...asked).map((f) => -f)},
  {name: "worst at 2 M", place: "outside", truth: along(2)},
  {name: "worst at 4 M", place: "outside", truth: along(4)},
];
