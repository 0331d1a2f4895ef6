/** Coverage of every kind of interval on every set-up, against what is stated; the full size of test/inverse/coverage.test.ts. */
import {type Cell, cellsOf, DRAWS, faultOf, LEVELS, LIMITS} from "../harness/coverage.ts";
import {KINDS, SET_UPS} from "../harness/coverage-kinds.ts";
import {FAMILIES, type Family} from "../harness/truths.ts";
import type {BenchCase, Figure} from "./bench-case.ts";
import {markdownTable} from "./results.ts";

const percent = (share: number): string => `${(100 * share).toFixed(1)}`;
const rangeText = (shares: readonly number[]): string =>
  `${percent(Math.min(...shares))} – ${percent(Math.max(...shares))} %`;

export const coverageCase: BenchCase = {
  name: "coverage",
  title: "Coverage of intervals under a given bound",
  run() {
    const rows = SET_UPS.flatMap((setUp, s) =>
      KINDS.flatMap((kind, k) =>
        LEVELS.map((level, l) => cellsOf(kind, setUp, level, (s * KINDS.length + k) * LEVELS.length + l + 1)),
      ),
    );
    const cells = rows.flat();
    const faults = cells.filter((cell) => faultOf(cell) !== undefined);
    const sharesOf = (place: Family["place"], own: readonly Cell[]): number[] =>
      own.filter(({family}) => family.place === place).map(({share}) => share);
    const figures = LEVELS.map((level): Figure => {
      const own = cells.filter((cell) => cell.level === level);
      return {
        what: `stated ${percent(level)} %, lowest of ${own.length} cells inside the ball`,
        program: `${percent(Math.min(...sharesOf("inside", own), ...sharesOf("worst", own)))} %`,
        baseline: "–",
        ratio: undefined,
        target: `≥ ${percent(level)} % within chance`,
        met: own.every((cell) => faultOf(cell) === undefined),
      };
    });
    const short = KINDS.flatMap(({name}) =>
      LEVELS.map((level) => {
        const own = cells.filter((cell) => cell.kind === name && cell.level === level);
        const at = (family: string): number[] =>
          own.filter((cell) => cell.family.name === family).map(({share}) => share);
        return [
          name,
          `${percent(level)} %`,
          rangeText(sharesOf("inside", own)),
          rangeText(sharesOf("worst", own)),
          rangeText(at("worst at 2 M")),
          rangeText(at("worst at 4 M")),
        ];
      }),
    );
    const full = rows.map((row) => [
      row[0]!.kind,
      row[0]!.setUp,
      `${percent(row[0]!.level)} %`,
      row[0]!.halfWidth.toPrecision(4),
      ...row.map(({share, lower, upper}) => `${percent(share)} (${percent(lower)}–${percent(upper)})`),
    ]);
    return {
      figures,
      notes: [
        `${DRAWS} draws of noise for each of ${cells.length} cells, seeds fixed; limits in brackets are exact ones of the binomial law at ${100 * LIMITS} %: of 10,000 sound cells one lies below them by chance and one above.`,
        "Truths are made on Gauss nodes of their own, not on the program's; of each random family the one of 100 draws that misleads most is taken. A regional of 40 mGal less 0.07 mGal/m lies on the readings where one is fitted.",
        `Cells that break the promise: ${faults.length === 0 ? "none" : faults.map((cell) => `${cell.kind}, ${cell.setUp}, ${cell.family.name}, ${percent(cell.level)} % ${faultOf(cell)}`).join("; ")}.`,
        "Truths of two and four times the bound are outside the promise: they show what it rests on.",
      ],
      tables: [
        markdownTable(
          ["kind", "stated", "truths in the ball", "worst truths in the ball", "worst at 2 M", "worst at 4 M"],
          short,
        ),
        markdownTable(["kind", "set-up", "stated", "half-width", ...FAMILIES.map(({name}) => name)], full),
      ],
    };
  },
};
