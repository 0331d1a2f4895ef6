/** `--bound compare` from the command to its files. */
import {existsSync, readFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {parsedPage} from "../harness/markup.ts";
import {parsedCsv} from "../harness/text-sink.ts";
import {fileWith, gridBytes, run, surveyText, temporaryFolder} from "./harness.ts";

const RULES = ["discrepancy", "cross-validation", "corner", "balance"];
const SETTINGS = ["--observable", "gravity", "--noise", "0.02"];
const STRIPS = ["--strip", "dyke=200:260", "--strip", "far=400:500"];

describe("a comparison of rules", () => {
  test("is printed, written as bounds.csv and shown in the report", async () => {
    const out = join(temporaryFolder(), "out");
    const survey = fileWith("lines.csv", surveyText(["L1", "L2"]));
    const result = await run(["continue", survey, ...SETTINGS, ...STRIPS, "--bound", "compare", "--out", out]);
    expect([result.status, result.err.includes("bounds.csv")]).toEqual([0, true]);
    for (const rule of RULES) expect(result.out).toMatch(new RegExp(`^L2 +${rule} +[\\d.e+]+ +[\\d.]+ +[\\d.]+ `, "m"));
    expect(result.out).toMatch(/^line +plain mean kg\/m2? +discrepancy +cross-validation +corner +balance$/m);
    expect(result.out).toMatch(/^L1 +dyke( +-?[\d.]+){4}$/m);
    for (const line of result.out.split("\n")) expect(line.length).toBeLessThanOrEqual(100);

    const rows = parsedCsv(readFileSync(join(out, "bounds.csv"), "utf8"));
    expect(rows.map(({line, rule, strip}) => `${line} ${rule} ${strip}`)).toEqual(
      ["L1", "L2"].flatMap((line) =>
        RULES.flatMap((rule) => ["dyke", "far"].map((strip) => `${line} ${rule} ${strip}`)),
      ),
    );
    const [ledger] = parsedCsv(readFileSync(join(out, "lines.csv"), "utf8"));
    const [first] = rows;
    expect([first["multiplier"], first["misfit"], first["degrees_of_freedom"], first["resolution_m"]]).toEqual([
      ledger["multiplier"],
      ledger["misfit"],
      ledger["degrees_of_freedom"],
      ledger["resolution_m"],
    ]);
    expect([first["norm_mGal_sqrt_m"], first["bound_mGal_sqrt_m"]]).toEqual([ledger["norm"], ledger["bound"]]);
    const [strip] = parsedCsv(readFileSync(join(out, "strips.csv"), "utf8"));
    expect(first["plain_mean_kg/m2"]).toBe(strip["plain_mean_kg/m2"]);
    for (const row of rows) expect(row["reason"].length).toBeGreaterThan(20);

    const page = readFileSync(join(out, "report.html"), "utf8");
    // Well formed, or this throws.
    expect(parsedPage(page).text).toContain("Other rules for the bound");
    expect(page.match(/<h3>Other rules for the bound<\/h3>/g)).toHaveLength(2);
    const section = page.slice(page.indexOf("<h3>Other rules"));
    for (const rule of RULES) expect(section).toContain(`<tr><td>${rule}<br>`);
    expect(JSON.parse(readFileSync(join(out, "record.json"), "utf8")).settings.bound).toBe("compare");
  });

  test("stands in --json, rule by rule", async () => {
    const out = join(temporaryFolder(), "out");
    const survey = fileWith("lines.csv", surveyText());
    const result = await run(["continue", survey, ...SETTINGS, "--bound", "compare", "--json", "--out", out]);
    const {rules, lines} = JSON.parse(result.out);
    expect(rules.map(({rule}: {rule: string}) => rule)).toEqual(RULES);
    expect(rules[0]).toMatchObject({
      line: "L1",
      multiplier: lines[0].multiplier,
      norm_mGal_sqrt_m: lines[0].norm_mGal_sqrt_m,
      strips: [],
      reason: lines[0].reason,
    });
    // Without strips a rule is one row.
    expect(parsedCsv(readFileSync(join(out, "bounds.csv"), "utf8")).map(({rule, strip}) => [rule, strip])).toEqual(
      RULES.map((rule) => [rule, ""]),
    );
  });

  test("is neither written nor printed where it was not asked for", async () => {
    const out = join(temporaryFolder(), "out");
    const survey = fileWith("lines.csv", surveyText());
    for (const rule of ["corner", "balance", "cross-validation"]) {
      const result = await run(["continue", survey, ...SETTINGS, "--bound", rule, "--out", out, "--replace"]);
      expect(result.status).toBe(0);
      expect(existsSync(join(out, "bounds.csv"))).toBe(false);
      expect(result.out).not.toContain("cross-validation");
      expect(parsedCsv(readFileSync(join(out, "lines.csv"), "utf8"))[0]["status"]).toMatch(/done|doubtful/);
    }
  });

  test("of a grid is refused before anything is written", async () => {
    const out = join(temporaryFolder(), "out");
    const grid = fileWith("grid.tif", gridBytes());
    const result = await run([
      ...["continue", grid, "--observable", "field-vertical", "--clearance", "60", "--noise", "1"],
      ...["--bound", "compare", "--out", out],
    ]);
    expect([result.status, existsSync(out)]).toEqual([2, false]);
    expect(result.err.replaceAll(/\s+/g, " ")).toMatch(/--bound discrepancy, corner or balance/);
  });
});
