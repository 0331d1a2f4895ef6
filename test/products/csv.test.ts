import {describe, expect, test} from "vitest";
import type {ReportableError} from "../../lib/errors.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {boundsAssumedCsv} from "../../lib/products/bounds-assumed-csv.ts";
import {levelsCsv} from "../../lib/products/levels-csv.ts";
import {linesCsv, rowsCsv} from "../../lib/products/lines-csv.ts";
import type {LineProduct, RunFrame, TextSink} from "../../lib/products/product.ts";
import {sourceCsv} from "../../lib/products/source-csv.ts";
import {stripsCsv} from "../../lib/products/strips-csv.ts";
import {tradeoffCsv} from "../../lib/products/tradeoff-csv.ts";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import {assertClose} from "../harness/assert-close.ts";
import {
  doneLine,
  failedLine,
  frameFixture,
  GAP_REMARK,
  lineStudy,
  RESIDUAL_DOUBT,
  rowOutcome,
} from "../harness/study-fixture.ts";
import {keptText, parsedCsv} from "../harness/text-sink.ts";

/** csvNumber rounds to twelve significant digits: half a unit of the twelfth is 5e-12 relative at most, 2.3e4 ε. */
const DIGITS = {factor: 2.3e4, because: "twelve significant digits are written"};

async function written(
  make: (sink: TextSink) => LineProduct,
  outcomes: readonly LineOutcome[],
  frame: RunFrame = frameFixture(),
): Promise<string> {
  const sink = keptText();
  const product = make(sink);
  await product.begin(frame);
  for (const outcome of outcomes) await product.line(outcome);
  await product.end();
  return sink.text();
}

const failureOf = (outcome: LineOutcome): ReportableError => {
  if ("study" in outcome) throw new Error("the line has a study");
  return outcome.failure;
};

const header = (text: string): string => text.slice(0, text.indexOf("\n"));

describe("headers carry the names and units of the contract", () => {
  const gravityFrame = frameFixture({observable: gravity});
  const cases: readonly [string, (sink: TextSink) => LineProduct, string, string][] = [
    [
      "source",
      sourceCsv,
      "line,from_m,to_m,x,y,source_nT,average_nT,lower_nT,upper_nT,averaged_over_m,interval_basis,resolution_m",
      "line,from_m,to_m,x,y,source_mGal,average_mGal,lower_mGal,upper_mGal,averaged_over_m,interval_basis,resolution_m",
    ],
    [
      "levels",
      levelsCsv,
      "line,row,chainage_m,x,y,level_m,field_nT,lower_nT,upper_nT,averaged_over_m,interval_basis",
      "line,row,chainage_m,x,y,level_m,field_mGal,lower_mGal,upper_mGal,averaged_over_m,interval_basis",
    ],
    [
      "strips",
      stripsCsv,
      "line,strip,from_m,to_m,mean_A/m,lower_A/m,upper_A/m,total_A,total_lower_A,total_upper_A,plain_mean_A/m,interval_basis",
      "line,strip,from_m,to_m,mean_kg/m2,lower_kg/m2,upper_kg/m2,total_kg/m,total_lower_kg/m,total_upper_kg/m,plain_mean_kg/m2,interval_basis",
    ],
    [
      "lines",
      linesCsv,
      "line,status,reason,stations,panels,modes,multiplier,bound,norm,bound_active,misfit,misfit_expected,noise_nT,resolution_m,degrees_of_freedom,trusted_level_m,noise_record_nT,noise_spectrum_nT,noise_length_m",
      "line,status,reason,stations,panels,modes,multiplier,bound,norm,bound_active,misfit,misfit_expected,noise_mGal,resolution_m,degrees_of_freedom,trusted_level_m,noise_record_mGal,noise_spectrum_mGal,noise_length_m",
    ],
    [
      "bounds assumed",
      boundsAssumedCsv,
      "line,of,name,factor,bound_nT_sqrt_m,mean_A/m,lower_A/m,upper_A/m,level_half_width_nT,average_half_width_nT",
      "line,of,name,factor,bound_mGal_sqrt_m,mean_kg/m2,lower_kg/m2,upper_kg/m2,level_half_width_mGal,average_half_width_mGal",
    ],
    ["tradeoff", tradeoffCsv, "line,multiplier,misfit,norm", "line,multiplier,misfit,norm"],
  ];
  for (const [name, make, magnetic, gravimetric] of cases)
    test(name, async () => {
      expect(header(await written(make, []))).toBe(magnetic);
      expect(header(await written(make, [], gravityFrame))).toBe(gravimetric);
    });
});

test("source.csv has a row a panel, in nT, at the place of its centre", async () => {
  const study = lineStudy();
  const rows = parsedCsv(await written(sourceCsv, [doneLine()]));
  expect(rows).toHaveLength(study.panels.count);
  const j = 70;
  const row = rows[j]!;
  const place = study.line.locate!(study.panels.centre[j]!);
  const wanted: readonly [string, number][] = [
    ["from_m", study.panels.from[j]!],
    ["to_m", study.panels.to[j]!],
    ["x", place[0]],
    ["y", place[1]],
    ["source_nT", study.estimate.density[j]! * 1e9],
    ["average_nT", study.averages.value[j]! * 1e9],
    ["lower_nT", study.averages.lower[j]! * 1e9],
    ["upper_nT", study.averages.upper[j]! * 1e9],
    ["averaged_over_m", study.averages.averagedOver[j]!],
    ["resolution_m", study.resolution.local[j]!],
  ];
  for (const [column, value] of wanted) assertClose(Number(row[column]), value, {...DIGITS, scale: value});
  expect(row["interval_basis"]).toBe("assumed-bound");
});

test("places are empty where only chainage is known", async () => {
  const outcome = doneLine({coordinates: "none"});
  for (const make of [sourceCsv, levelsCsv])
    for (const row of parsedCsv(await written(make, [outcome]))) expect([row["x"], row["y"]]).toEqual(["", ""]);
});

test("levels.csv gives level after level, stations in the order of the file", async () => {
  const outcome = doneLine({reversed: true});
  const study = lineStudy({reversed: true});
  const rows = parsedCsv(await written(levelsCsv, [outcome]));
  const {count, row, chainage, x, y} = study.line.stations;
  expect(rows).toHaveLength(2 * count);
  for (const [block, level] of study.levels.entries()) {
    const part = rows.slice(block * count, (block + 1) * count);
    expect(part.map((r) => Number(r["row"]))).toEqual([...row]);
    expect(part.map((r) => Number(r["chainage_m"]))).toEqual([...chainage]);
    for (const i of [0, 77, count - 1]) {
      const wanted: readonly [string, number][] = [
        ["x", x![i]!],
        ["y", y![i]!],
        ["level_m", level.height[i]!],
        ["field_nT", level.value[i]! * 1e9],
        ["lower_nT", level.lower[i]! * 1e9],
        ["upper_nT", level.upper[i]! * 1e9],
      ];
      for (const [column, value] of wanted) assertClose(Number(part[i]![column]), value, {...DIGITS, scale: value});
    }
  }
  expect(rows[0]!["averaged_over_m"]).toBe("5");
  expect(rows[count]!["averaged_over_m"]).toBe("");
});

test("strips.csv: magnetisation 2f/μ0, total = mean × length", async () => {
  const study = lineStudy({basis: "given-bound"});
  const rows = parsedCsv(await written(stripsCsv, [doneLine({basis: "given-bound"})]));
  expect(rows.map((row) => row["strip"])).toEqual(["dyke", "rubble"]);
  const [dyke] = rows;
  const [estimate] = study.strips;
  const perField = 2 / 1.25663706127e-6;
  for (const [column, si] of [
    ["mean_A/m", estimate!.mean],
    ["lower_A/m", estimate!.lower],
    ["upper_A/m", estimate!.upper],
    ["plain_mean_A/m", estimate!.plainMean],
  ] as const)
    assertClose(Number(dyke![column]), si * perField, {...DIGITS, scale: si * perField});
  for (const [column, si] of [
    ["total_A", estimate!.mean],
    ["total_lower_A", estimate!.lower],
    ["total_upper_A", estimate!.upper],
  ] as const)
    assertClose(Number(dyke![column]), si * perField * 20, {...DIGITS, scale: si * perField * 20});
  expect(dyke!["interval_basis"]).toBe("given-bound");
});

test("strips.csv: 1 mGal over a strip is 23845.94 kg/m2", async () => {
  // theory: σ = f/(2πG); 1 mGal ↔ 23845.94 kg/m², computed independently to those digits.
  const study = lineStudy({observable: gravity});
  const outcome: LineOutcome = {
    status: "done",
    id: "g",
    study: {
      ...study,
      strips: [
        {strip: {name: "s", from: 3, to: 5, group: undefined}, mean: 1e-5, lower: 0, upper: 2e-5, plainMean: 1e-5},
      ],
    },
  };
  const [row] = parsedCsv(await written(stripsCsv, [outcome], frameFixture({observable: gravity})));
  expect(Number(row!["mean_kg/m2"])).toBeCloseTo(23845.94, 2);
  expect(Number(row!["total_kg/m"])).toBeCloseTo(2 * 23845.94, 1);
  expect(row!["lower_kg/m2"]).toBe("0");
});

test("lines.csv holds the figures in delivered units and the doubts after the reason", async () => {
  const notices = [RESIDUAL_DOUBT, GAP_REMARK];
  const study = lineStudy({notices});
  const [row] = parsedCsv(await written(linesCsv, [doneLine({notices})]));
  expect(row!["status"]).toBe("doubtful");
  expect(row!["reason"]).toBe(`${study.choice.reason}; ${RESIDUAL_DOUBT.message}`);
  const wanted: readonly [string, number][] = [
    ["stations", 221],
    ["panels", study.panels.count],
    ["modes", 88],
    ["multiplier", study.choice.multiplier * 1e-18],
    ["bound", study.choice.bound * 1e9],
    ["norm", study.estimate.norm * 1e9],
    ["misfit", study.estimate.misfit],
    ["misfit_expected", 221],
    ["noise_nT", 0.4],
    ["resolution_m", 5.1],
    ["degrees_of_freedom", 31.4],
  ];
  for (const [column, value] of wanted) assertClose(Number(row![column]), value, {...DIGITS, scale: value});
  expect(row!["bound_active"]).toBe("true");
});

test("a line without an answer stands in lines.csv with its reason, and nowhere else", async () => {
  const outcomes = [failedLine("L7"), failedLine("L8", "skipped"), doneLine()];
  const rows = parsedCsv(await written(linesCsv, outcomes));
  expect(rows.map((row) => [row["line"], row["status"]])).toEqual([
    ["L7", "failed"],
    ["L8", "skipped"],
    ["L101", "done"],
  ]);
  expect(rows[0]!["reason"]).toMatch(/^Station 14 of line L7 is 0\.4 m below the boundary/);
  for (const column of ["stations", "multiplier", "bound", "bound_active", "misfit", "noise_nT", "degrees_of_freedom"])
    expect(rows[0]![column]).toBe("");
  for (const make of [sourceCsv, levelsCsv, stripsCsv, tradeoffCsv])
    for (const row of parsedCsv(await written(make, outcomes))) expect(row["line"]).toBe("L101");
});

test("modes are empty where nothing was diagonalised, rows of a grid go into the same columns", async () => {
  const sink = keptText();
  const product = rowsCsv(sink);
  await product.begin(frameFixture());
  await product.row(rowOutcome(4, 50));
  await product.row({status: "skipped", id: "row 6", index: 5, failure: failureOf(failedLine("x"))});
  await product.end();
  const [done, skipped] = parsedCsv(sink.text());
  expect(header(sink.text())).toBe(header(await written(linesCsv, [])));
  expect([done!["line"], done!["status"], done!["modes"], done!["stations"]]).toEqual(["row 5", "done", "", "50"]);
  assertClose(Number(done!["multiplier"]), 2e-3, {...DIGITS, scale: 2e-3});
  expect([skipped!["line"], skipped!["status"], skipped!["misfit"]]).toEqual(["row 6", "skipped", ""]);
});

test("in tradeoff.csv the slope of misfit over norm² is minus the multiplier of lines.csv and tradeoff.csv", async () => {
  for (const observable of [undefined, gravity]) {
    const options = observable === undefined ? {} : {observable, strength: 2e-5, noise: 2e-7};
    const frame = observable === undefined ? frameFixture() : frameFixture({observable});
    const rows = parsedCsv(await written(tradeoffCsv, [doneLine(options)], frame)).map((row) => ({
      multiplier: Number(row["multiplier"]),
      misfit: Number(row["misfit"]),
      square: Number(row["norm"]) ** 2,
    }));
    expect(rows).toHaveLength(61);
    for (let k = 0; k + 1 < rows.length; ++k) {
      const a = rows[k]!;
      const b = rows[k + 1]!;
      // The curve is convex, so the slope of a chord lies between those at its ends (mean value theorem).
      // 1e-6: chords at the flat end lose six of the twelve digits written.
      const slope = (b.misfit - a.misfit) / (b.square - a.square);
      expect(-slope).toBeGreaterThan(a.multiplier * (1 - 1e-6));
      expect(-slope).toBeLessThan(b.multiplier * (1 + 1e-6));
    }
    const [ledger] = parsedCsv(await written(linesCsv, [doneLine(options)], frame));
    const chosen = rows[32]!;
    assertClose(Number(ledger!["multiplier"]), chosen.multiplier, {...DIGITS, scale: chosen.multiplier});
    assertClose(Number(ledger!["norm"]), Math.sqrt(chosen.square), {...DIGITS, scale: Math.sqrt(chosen.square)});
  }
});

test("no cell starts a formula, and a name cannot break a row", async () => {
  const name = '=cmd|"/c calc"!A1,\n<b>';
  const outcomes = [doneLine({id: name, strips: [{name: "+1+1", from: 0, to: 9, group: undefined}]}), failedLine("@x")];
  for (const make of [sourceCsv, levelsCsv, stripsCsv, linesCsv, tradeoffCsv]) {
    const text = await written(make, outcomes);
    const rows = parsedCsv(text);
    expect(rows.length).toBeGreaterThan(0);
    expect(rows[0]!["line"]).toBe(`'${name}`);
    for (const row of rows)
      for (const cell of Object.values(row))
        if (!Number.isFinite(Number(cell))) expect(cell).not.toMatch(/^[=+\-@\t\r]/);
  }
  expect(parsedCsv(await written(stripsCsv, outcomes))[0]!["strip"]).toBe("'+1+1");
});

test("the same studies give the same bytes, and long lines go out in pieces", async () => {
  for (const make of [sourceCsv, levelsCsv, stripsCsv, linesCsv, tradeoffCsv])
    expect(await written(make, [doneLine(), failedLine("q")])).toBe(await written(make, [doneLine(), failedLine("q")]));
  const sink = keptText();
  const product = levelsCsv(sink);
  await product.begin(frameFixture());
  await product.line(doneLine({to: 8000}));
  expect(sink.text().length).toBeGreaterThan(1_000_000);
  expect(sink.longest()).toBeLessThan(1 << 17);
});

test("bounds_assumed.csv has strips, levels and averages at each factor, and nothing of a given bound", async () => {
  const study = lineStudy();
  const rows = parsedCsv(await written(boundsAssumedCsv, [doneLine()]));
  expect(rows.map(({of, name, factor}) => `${of} ${name} ${factor}`).slice(0, 5)).toEqual([
    "strip dyke 0.5",
    "strip rubble 0.5",
    "level 0 0.5",
    "level ground+2 0.5",
    "averages  0.5",
  ]);
  expect(rows).toHaveLength(4 * 5);
  const {bound, levels, averages} = study.atBounds![3]!;
  const at = (of: string, name: string) =>
    rows.find((row) => row["of"] === of && row["name"] === name && row["factor"] === "4")!;
  const wanted: readonly [string, number][] = [
    [at("strip", "dyke")["bound_nT_sqrt_m"]!, bound * 1e9],
    [at("level", "ground+2")["level_half_width_nT"]!, levels[1]! * 1e9],
    [at("averages", "")["average_half_width_nT"]!, averages * 1e9],
  ];
  for (const [written, value] of wanted) assertClose(Number(written), value, {...DIGITS, scale: value});
  expect(parsedCsv(await written(boundsAssumedCsv, [doneLine({basis: "given-bound"}), failedLine("L9")]))).toEqual([]);
});

test("lines.csv leaves the depth to trust empty where there is none", async () => {
  const study = lineStudy();
  const trusted = async (trust: typeof study.trust) =>
    parsedCsv(await written(linesCsv, [{status: "done", id: "L1", study: {...study, trust}}]))[0]!["trusted_level_m"];
  expect(await trusted(study.trust)).toBe("3.2");
  expect(await trusted({...study.trust!, level: Number.NaN})).toBe("");
  expect(await trusted(undefined)).toBe("");
});
