import {readFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {contents, fileWith, run, temporaryFolder} from "./harness.ts";

const BASE = "--observable gravity --clearance 20 --spacing 10 --noise 0.5 --bound rms:30 --length 300".split(" ");
const plan = (...more: string[]) => run(["plan", ...BASE, ...more]);

describe("plan", () => {
  test("prints tables no wider than 120 columns, cautions beside them", async () => {
    const {status, out, err} = await plan("--clearance", "40", "--strip-width", "20", "--level", "10");
    expect(status).toBe(0);
    for (const line of out.split("\n")) expect(line.length).toBeLessThanOrEqual(120);
    expect(out).toMatch(/^gravity$/m);
    expect(err.replaceAll(/\s+/g, " ")).toContain("A computed source is not clearance");
  });

  test("--json holds every combination, strip and level", async () => {
    const {out} = await plan("--noise", "1", "--strip-width", "20", "--strip-width", "40", "--level", "10", "--json");
    const {cases} = JSON.parse(out);
    expect(cases).toHaveLength(2);
    for (const one of cases) {
      expect(one.strips).toHaveLength(2);
      expect(one.strips[0]["total_half_width_kg/m"]).toBeCloseTo(20 * one.strips[0]["half_width_kg/m2"], 6);
      expect(one.levels).toHaveLength(1);
    }
    // More noise, wider intervals.
    expect(cases[1].strips[0]["half_width_kg/m2"]).toBeGreaterThan(cases[0].strips[0]["half_width_kg/m2"]);
  });

  test("told_up_to_m is empty where it was not asked, and 0 where no height will do", async () => {
    const told = async (...more: string[]): Promise<{csv: string | undefined; json: number | null}> => {
      const folder = join(temporaryFolder(), "out");
      const {out} = await plan("--strip-width", "20", "--out", folder, "--json", ...more);
      const [heads, row] = readFileSync(join(folder, "plan.csv"), "utf8").split("\n");
      const place = heads!.split(",").indexOf("told_up_to_m");
      return {csv: row!.split(",")[place], json: JSON.parse(out).cases[0].strips[0].told_up_to_m};
    };
    expect(await told()).toEqual({csv: "", json: null});
    expect(await told("--strip-strength", "1")).toEqual({csv: "0", json: 0});
    const {csv, json} = await told("--strip-strength", "3.4e6");
    expect(Number(csv)).toBeGreaterThan(20);
    expect(Number(csv)).toBeCloseTo(json!, 6);
  });

  test("--out writes all files, again over its own, and never over those of others", async () => {
    const folder = join(temporaryFolder(), "out");
    expect((await plan("--out", folder)).status).toBe(0);
    expect(contents(folder)).toEqual(["plan.csv", "plan.html", "record.json", "timing.json"]);
    expect((await plan("--out", folder)).status).toBe(0);
    expect(await plan("--level", "5", "--out", folder)).toMatchObject({status: 2, out: ""});
    const foreign = temporaryFolder();
    fileWith("plan.csv", "mine", foreign);
    expect(await plan("--out", foreign)).toMatchObject({status: 2, out: ""});
    expect(contents(foreign)).toEqual(["plan.csv"]);
  });

  const refused: readonly [string, string[], RegExp][] = [
    ["no observable", ["--clearance", "20"], /--observable is missing/],
    ["no bound", BASE.slice(0, 8), /--bound is missing.*rms:30/],
    ["a rule", [...BASE, "--bound", "discrepancy"], /before a survey there are none.*--bound rms:V/],
    ["clearance 0", [...BASE, "--clearance", "0"], /--clearance "0" is out of range/],
    ["two units", [...BASE, "--observable", "field-vertical"], /different units/],
    ["no direction", ["--observable", "total-field-anomaly", ...BASE.slice(2)], /--inclination.*--azimuth/],
    ["a wide strip", [...BASE, "--strip-width", "900"], /longer than the line/],
    ["an elevation", [...BASE, "--boundary", "-5"], /--boundary depth-2/],
    ["a strength beyond the bound", [...BASE, "--strip-strength", "1e9"], /exceeds the bound/],
  ];
  test.each(refused)("refuses %s with a cure and no output", async (_, args, message) => {
    const {status, out, err} = await run(["plan", ...args]);
    expect([2, 3]).toContain(status);
    expect(out).toBe("");
    expect(err.replaceAll(/\s+/g, " ")).toMatch(message);
  });
});
