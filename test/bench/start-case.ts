/** How long a user waits for --help: the start of the program against a bare start of Node. */
import {alternate, type BenchCase, median, spreadText} from "./bench-case.ts";
import {measured, measuredProgram} from "./measured.ts";

const RUNS = 20;

export const startCase: BenchCase = {
  name: "start",
  title: "Start of the program",
  run() {
    const runs = alternate(
      RUNS,
      () => measuredProgram(["--help"]),
      () => measured(process.execPath, ["--eval", "0"]),
    );
    const [ours, bare] = [runs.program, runs.baseline].map((list) => list.map(({seconds}) => seconds));
    return {
      figures: [
        {
          what: "--help",
          program: spreadText(ours!),
          baseline: spreadText(bare!),
          ratio: median(ours!) / median(bare!),
          target: "",
          met: undefined,
        },
      ],
      notes: [`${RUNS} runs each, in turn; the baseline is Node with nothing to do.`],
    };
  },
};
