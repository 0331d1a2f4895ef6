/** The main job on files, in this process: what is written, printed and returned. */
import {createHash} from "node:crypto";
import {readFileSync, writeFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {seededRandom} from "../../lib/numeric/random.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {parsedCsv} from "../harness/text-sink.ts";
import {contents, fileWith, gridBytes, run, surveyText, temporaryFolder} from "./harness.ts";

const LINE_FILES = [
  "levels.csv",
  "lines.csv",
  "record.json",
  "report.html",
  "source.csv",
  "strips.csv",
  "timing.json",
  "tradeoff.csv",
];
const SETTINGS = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5", "--strip", "dyke=200:260"];
const flat = (text: string): string => text.replaceAll(/\s+/g, " ");
const table = (out: string, name: string) => parsedCsv(readFileSync(join(out, name), "utf8"));

describe("continue over lines", () => {
  test("writes every file, prints a table, and closes with grounds and cautions", async () => {
    const out = join(temporaryFolder(), "out");
    const survey = fileWith("lines.csv", surveyText(["L1", "L2"]));
    const result = await run(["continue", survey, ...SETTINGS, "--level", "0", "--level", "10", "--out", out]);
    expect(result.status).toBe(0);
    expect(contents(out)).toEqual(LINE_FILES);
    expect(result.out).toMatch(/^line +status +stations +noise mGal .*\n-+ .*\nL1 +\w+ +60 +0\.0200 /);
    expect(result.out).toMatch(/^L2 +dyke +\d/m);
    for (const line of result.out.split("\n")) expect(line.length).toBeLessThanOrEqual(100);
    const err = flat(result.err);
    expect(err).toMatch(/Columns: .*value from "gravity" \(recognised\)/);
    expect(err).toMatch(/2 of 2 lines: L2/);
    expect(err).toMatch(/doubt: 2 lines \(L1, L2\).*\[boundary\/ground-taken-as-flat\]/);
    expect(err).toMatch(/Given bound\./);
    expect(err).toMatch(/not clearance to dig, drill or enter/);
    expect(table(out, "levels.csv")).toHaveLength(2 * 60 * 2);
    expect(table(out, "strips.csv").map(({line, strip}) => `${line} ${strip}`)).toEqual(["L1 dyke", "L2 dyke"]);
    // The strip's own 0.6 mGal lies in its interval: 0.6e-5 / (2πG) kg/m².
    const truth = 0.6e-5 / (2 * Math.PI * 6.6743e-11);
    for (const strip of table(out, "strips.csv")) {
      expect(Number(strip["lower_kg/m2"])).toBeLessThan(truth);
      expect(Number(strip["upper_kg/m2"])).toBeGreaterThan(truth);
    }
  });

  test("a length of the noise reaches answers, ledger, record and report; that of white noise changes nothing", async () => {
    const folder = temporaryFolder();
    const survey = fileWith("lines.csv", surveyText(["L1"]), folder);
    const into = async (name: string, ...own: readonly string[]): Promise<string> => {
      const out = join(folder, name);
      expect((await run(["continue", survey, ...SETTINGS, ...own, "--out", out])).status).toBe(0);
      return out;
    };
    const [white, zero, red] = [
      await into("white"),
      await into("zero", "--noise-length", "0"),
      await into("red", "--noise-length", "3"),
    ];
    for (const name of LINE_FILES.filter((file) => file !== "timing.json"))
      expect(readFileSync(join(zero, name), "utf8"), name).toBe(readFileSync(join(white, name), "utf8"));
    expect(table(white, "strips.csv")).not.toEqual(table(red, "strips.csv"));
    expect(table(red, "lines.csv")[0]).toMatchObject({noise_mGal: "0.02", noise_length_m: "3"});
    expect(Number(table(white, "lines.csv")[0]!["noise_record_mGal"])).toBeGreaterThan(0);
    expect(JSON.parse(readFileSync(join(red, "record.json"), "utf8")).settings.acquisition.noiseLength).toBe(3);
    const report = readFileSync(join(red, "report.html"), "utf8");
    expect(report).toMatch(/noise 0\.02 mGal given, correlated over 3(\.0)? m along the line/);
    expect(report).toMatch(
      /Noise by each way<\/dt><dd>given 0\.0200?; from the record 0\.0\d+; from the shortest waves/,
    );
  });

  test("lines that differ on a strip by more than their intervals allow are told on the screen, in the report and in the ledger", async () => {
    /** 10 m above a plate of 0.6 mGal below chainage 150:310, on the last of three lines so many times as strong. */
    const survey = (times: number): string => {
      const {normal} = seededRandom(24);
      const rows = ["L1", "L2", "L3"].flatMap((line, k) =>
        Array.from({length: 120}, (_, i) => {
          const clean = 0.6 * harmonicMeasure(5 * i, 10, 150, 310) * (k === 2 ? times : 1);
          return `${line},${5 * i},10,${(clean + 0.005 * normal()).toFixed(5)}`;
        }),
      );
      return fileWith("lines.csv", `line,chainage,clearance,gravity\n${rows.join("\n")}\n`);
    };
    // ‖f‖ of the strong plate is 22.8 mGal·√m. With a regional, a line this short leaves its level open.
    const bound = ["--noise", "0.005", "--bound", "norm:24", "--regional", "none"];
    const settings = ["--observable", "gravity", ...bound, "--strip", "dyke=150:310"];
    const out = join(temporaryFolder(), "out");
    const result = await run(["continue", survey(3), ...settings, "--out", out]);
    expect(result.status).toBe(0);
    const told = /Strip dyke: lines L2 and L3 differ by more than their intervals allow \(1 of 2 pairs of neighbours\)/;
    expect(flat(result.err)).toMatch(new RegExp(`doubt: ${told.source}.*\\[strip/neighbours-differ\\]`));
    expect(readFileSync(join(out, "report.html"), "utf8")).toMatch(told);
    // In the ledger, on the two lines it speaks of.
    expect(table(out, "lines.csv").map(({line, reason}) => [line, told.test(reason!)])).toEqual([
      ["L1", false],
      ["L2", true],
      ["L3", true],
    ]);
    const json = await run(["continue", survey(3), ...settings, "--out", out, "--replace", "--json"]);
    expect(JSON.parse(json.out).doubts).toContainEqual(
      expect.objectContaining({code: "strip/neighbours-differ", count: 0, message: expect.stringMatching(told)}),
    );
    const alike = await run(["continue", survey(1), ...settings, "--out", out, "--replace"]);
    expect(alike.status).toBe(0);
    expect(alike.err).not.toMatch(/neighbours-differ/);
  });

  test("--strike scales totals and is kept in record and report; a grid and an oblique line refuse it", async () => {
    // A line towards azimuth 30 over a strip across 200:260 of its chainage.
    const rows = surveyText(["L1"], 60).trimEnd().split("\n").slice(1);
    const [sin, cos] = [0.5, Math.sqrt(0.75)];
    const placed = rows.map((row) => {
      const [line, x, height, value] = row.split(",");
      return `${line},${x},${5000 + Number(x) * sin},${9000 + Number(x) * cos},${height},${value}`;
    });
    const survey = fileWith("lines.csv", `line,chainage,x,y,clearance,gravity\n${placed.join("\n")}\n`);
    const out = join(temporaryFolder(), "out");
    const result = await run(["continue", survey, ...SETTINGS, "--strike", "90", "--out", out, "--json"]);
    expect(result.status).toBe(0);
    const {from_m, to_m, ...strip} = JSON.parse(result.out).strips[0];
    expect([from_m, to_m]).toEqual([200, 260]);
    // At 60°, of 60 m along the line 60 sin 60° across.
    expect(strip["total_kg/m"] / strip["mean_kg/m2"]).toBeCloseTo(60 * Math.sqrt(0.75), 6);
    expect(JSON.parse(readFileSync(join(out, "record.json"), "utf8")).settings.model.strike).toBe(90);
    expect(readFileSync(join(out, "report.html"), "utf8")).toContain("Strike of the sources");
    const oblique = await run(["continue", survey, ...SETTINGS, "--strike", "45", "--out", out, "--replace"]);
    expect(oblique.status).toBe(3);
    expect(oblique.err).toMatch(/\[strike\/too-oblique\]/);
    const grid = ["continue", fileWith("g.tif", gridBytes()), "--observable", "field-vertical", "--noise", "1"];
    const refused = await run([...grid, "--boundary", "0", "--elevation", "60", "--strike", "90", "--out", `${out}2`]);
    expect(refused.status).toBe(2);
    expect(refused.err).toMatch(/\[strike\/grid\]/);
  });

  test("the record digests every file as it stands, and holds no path, clock or option of printing", async () => {
    const out = join(temporaryFolder(), "out");
    const survey = fileWith("lines.csv", surveyText());
    await run(["continue", survey, ...SETTINGS, "--out", out, "--quiet"]);
    const text = readFileSync(join(out, "record.json"), "utf8");
    const record = JSON.parse(text);
    const sha256 = (path: string) => createHash("sha256").update(readFileSync(path)).digest("hex");
    expect(record.inputs).toEqual([{file: "lines.csv", bytes: surveyText().length, sha256: sha256(survey)}]);
    expect(record.outputs.map(({file}: {file: string}) => file).sort()).toEqual(
      LINE_FILES.filter((name) => name !== "record.json" && name !== "timing.json"),
    );
    for (const output of record.outputs) expect(output.sha256).toBe(sha256(join(out, output.file)));
    expect(text).not.toContain(survey.slice(0, survey.lastIndexOf("/")));
    expect(text).not.toMatch(/quiet|20\d\d-\d\d-\d\dT/);
  });

  test("the same run twice, anywhere and at any time, gives the same bytes, timing apart", async () => {
    const [one, two] = [temporaryFolder(), temporaryFolder()];
    await run(["continue", fileWith("lines.csv", surveyText()), ...SETTINGS, "--out", one]);
    const later = {now: () => 1e12};
    await run(["continue", fileWith("lines.csv", surveyText()), ...SETTINGS, "--out", two, "--json"], later);
    for (const name of LINE_FILES.filter((file) => file !== "timing.json"))
      expect(readFileSync(join(two, name)).equals(readFileSync(join(one, name)))).toBe(true);
    expect(JSON.parse(readFileSync(join(two, "timing.json"), "utf8")).started).toBe("2001-09-09T01:46:40.000Z");
  });

  test("--json puts one object on standard output and nothing on standard error", async () => {
    const out = temporaryFolder();
    const args = ["continue", fileWith("lines.csv", surveyText()), ...SETTINGS, "--out", out, "--json"];
    const result = await run(args);
    expect({status: result.status, err: result.err}).toEqual({status: 0, err: ""});
    const object = JSON.parse(result.out);
    expect(object.files.sort()).toEqual(LINE_FILES);
    const [strip] = table(out, "strips.csv");
    // Files carry 12 significant digits.
    expect(Number(object.strips[0]["mean_kg/m2"].toPrecision(12))).toBe(Number(strip!["mean_kg/m2"]));
    expect(object.lines[0]).toMatchObject({line: "L1", stations: 60, noise_mGal: expect.closeTo(0.02, 12)});
    expect(object.doubts.map(({code}: {code: string}) => code)).toContain("boundary/ground-taken-as-flat");
    expect(object.intervals[0].basis).toBe("given-bound");
    expect(object.cautions.join(" ")).toMatch(/not clearance to dig/);
  });

  test("--quiet leaves the table and nothing else", async () => {
    const args = ["continue", fileWith("lines.csv", surveyText()), ...SETTINGS, "--out", temporaryFolder(), "--quiet"];
    const result = await run(args);
    expect(result.err).toBe("");
    expect(result.out).toMatch(/^line /);
  });

  test("on a terminal the progress line is cleared before anything else is said", async () => {
    const args = ["continue", fileWith("lines.csv", surveyText()), ...SETTINGS, "--out", temporaryFolder()];
    const result = await run(args, {}, true);
    expect(result.err).toContain("\r\u001b[2K1 of 1 lines · L1\r\u001b[2Kdoubt:");
    expect(result.out).not.toContain("\u001b");
  });

  test("several lines, one failing: status 5, the others answered, the ledger and standard error say why", async () => {
    const out = temporaryFolder();
    // L2 flies at the boundary.
    const text = surveyText(["L1", "L2", "L3"]).replace("L2,100,30,", "L2,100,0,");
    const result = await run(["continue", fileWith("lines.csv", text), ...SETTINGS, "--out", out]);
    expect(result.status).toBe(5);
    const ledger = table(out, "lines.csv");
    expect(ledger.map(({line, status}) => [line, status === "failed"])).toEqual([
      ["L1", false],
      ["L2", true],
      ["L3", false],
    ]);
    expect(ledger[1]!["reason"]).toMatch(/boundary/);
    expect(flat(result.err)).toMatch(/error: lines\.csv:72 · line L2 · .*\[boundary\/station-below\]/);
    expect(result.err).not.toMatch(/lines\.csv names/);
    expect(contents(out)).toEqual(LINE_FILES);
  });

  test("some failing alike: told once, with the way to the ledger", async () => {
    const text = surveyText(["L1", "L2", "L3"]).replace("L1,100,30,", "L1,100,0,").replace("L3,200,30,", "L3,200,0,");
    const survey = fileWith("lines.csv", text);
    const result = await run(["continue", survey, ...SETTINGS, "--out", temporaryFolder()]);
    expect(result.status).toBe(5);
    expect(result.err.match(/boundary\/station-below/g)).toHaveLength(1);
    expect(flat(result.err)).toMatch(/2 lines \(L1, L3\) · as on L1: .* lines\.csv names each line with its reason\./);
  });

  test("all failing alike: their own status, and no folder", async () => {
    const out = join(temporaryFolder(), "out");
    // Every line dips to the boundary at another station, so that place and figures differ.
    const names = Array.from({length: 12}, (_, i) => `L${i + 1}`);
    const dip = (text: string, name: string, i: number): string =>
      text.replace(`${name},${100 + 10 * i},30,`, `${name},${100 + 10 * i},0,`);
    const survey = fileWith("lines.csv", names.reduce(dip, surveyText(names)));
    const result = await run(["continue", survey, ...SETTINGS, "--out", out]);
    expect(result.status).toBe(3);
    expect(result.out).toBe("");
    expect(contents(out)).toEqual([]);
    // Told once, and of no ledger, since none is kept.
    expect(result.err.match(/boundary\/station-below/g)).toHaveLength(1);
    expect(flat(result.err)).toMatch(
      /error: lines\.csv:12 · 12 lines \(L1, L2, L3, L4 and 8 more\) · as on L1: .*\[boundary\/station-below\]/,
    );
    expect(result.err).not.toMatch(/lines\.csv names/);
    const scripts = await run(["continue", survey, ...SETTINGS, "--out", out, "--json"]);
    const objects = scripts.err
      .trimEnd()
      .split("\n")
      .map((line) => JSON.parse(line));
    expect(objects.map(({line, row}) => [line, row])).toEqual(names.map((name, i) => [name, 12 + 61 * i]));
  });

  test("another run in the folder is refused with status 2 before any work, unless --replace", async () => {
    const out = temporaryFolder();
    const survey = fileWith("lines.csv", surveyText());
    const go = (...more: string[]) => run(["continue", survey, ...SETTINGS, "--out", out, ...more]);
    expect((await go()).status).toBe(0);
    const before = readFileSync(join(out, "source.csv"), "utf8");
    const refused = await go("--regional", "0");
    expect(refused.status).toBe(2);
    expect(flat(refused.err)).toMatch(
      /The folder holds another run \(--regional was "1" and is "0"\)\. Give --replace/,
    );
    expect(readFileSync(join(out, "source.csv"), "utf8")).toBe(before);
    expect((await go("--regional", "0", "--replace")).status).toBe(0);
    expect(readFileSync(join(out, "source.csv"), "utf8")).not.toBe(before);
    writeFileSync(survey, `${surveyText()}L1,600,30,0.1\n`);
    expect(flat((await go("--regional", "0")).err)).toMatch(/\("lines\.csv" has changed since\).*\[out\/other-run\]/);
  });
});

describe("continue over a grid", () => {
  const GRID = ["--observable", "field-vertical", "--clearance", "60", "--noise", "1", "--bound", "discrepancy"];

  test("writes rasters, ledger and report; prints the rows taken together and the caution of rows", async () => {
    const out = temporaryFolder();
    const result = await run([
      "continue",
      fileWith("grid.tif", gridBytes()),
      ...GRID,
      "--level",
      "0",
      "--level",
      "20",
      "--out",
      out,
    ]);
    expect(result.err).not.toMatch(/error/);
    expect(result.status).toBe(0);
    expect(contents(out)).toEqual([
      ..."level_0_rowwise.tif level_20_rowwise.tif lines.csv record.json report.html source_rowwise.tif timing.json".split(
        " ",
      ),
    ]);
    expect(result.out).toMatch(/^pixels with a reading +120$/m);
    expect(flat(result.err)).toMatch(/not a three-dimensional continuation/);
    expect(table(out, "lines.csv")).toHaveLength(5);
  });

  test("columns on request", async () => {
    const out = temporaryFolder();
    const args = [
      "continue",
      fileWith("grid.tif", gridBytes(12, 16)),
      ...GRID,
      "--profiles",
      "columns",
      "--out",
      out,
      "--json",
    ];
    const result = await run(args);
    expect(result.err).toBe("");
    expect(JSON.parse(result.out)).toMatchObject({pixels: 192, noise_nT: expect.closeTo(1, 12)});
    expect(contents(out)).toContain("source_columnwise.tif");
    expect(table(out, "lines.csv")).toHaveLength(12);
  });

  test("strips of lines are refused, with the way to lines", async () => {
    const out = join(temporaryFolder(), "out");
    const ring = [
      [147, -27.1],
      [147.01, -27.1],
      [147.01, -27.2],
      [147, -27.1],
    ];
    const pit = {type: "Feature", properties: {name: "pit"}, geometry: {type: "Polygon", coordinates: [ring]}};
    const file = fileWith("pits.geojson", JSON.stringify(pit));
    const grid = fileWith("grid.tif", gridBytes());
    const go = (...more: string[]) => run(["continue", grid, ...GRID, ...more, "--out", out]);
    for (const [more, named] of [
      [["--strip", "dyke=0:100"], '--strip ("dyke")'],
      [["--strips", file], '--strips ("pit")'],
    ] as const) {
      const {status, out: printed, err} = await go(...more);
      expect({status, printed}).toEqual({status: 2, printed: ""});
      expect(flat(err)).toContain(`error: ${named} asks for means along a line`);
      expect(flat(err)).toMatch(/--profiles FILE\.geojson or --every N\. \[option\/lines-only\]/);
      expect(contents(out)).toEqual([]);
    }
    const trust = await go("--trust-fraction", "0.1");
    expect({status: trust.status, printed: trust.out}).toEqual({status: 2, printed: ""});
    expect(flat(trust.err)).toMatch(/--trust-fraction compares the intervals of a line .*\[option\/lines-only\]/);
    // Lines taken out of the grid have strips.
    expect((await go("--strip", "dyke=0:100", "--every", "2")).status).not.toBe(2);
    expect(table(out, "strips.csv").map(({strip}) => strip)).toEqual(["dyke", "dyke", "dyke"]);
  });

  test("a raster of someone else is refused before the work", async () => {
    const out = temporaryFolder();
    writeFileSync(join(out, "source_rowwise.tif"), "mine");
    const result = await run(["continue", fileWith("grid.tif", gridBytes()), ...GRID, "--out", out]);
    expect(result.status).toBe(2);
    expect(result.err).toMatch(/out\/foreign-file/);
    expect(contents(out)).toEqual(["source_rowwise.tif"]);
  });
});
