import {describe, expect, test} from "vitest";
import {run} from "./harness.ts";

const spectrum = (...args: string[]) => run(["spectrum", ...args]);

describe("spectrum", () => {
  test("prints JSON of descending eigenvalues and all usable modes, however many were asked", async () => {
    const {status, out, err} = await spectrum("--support", "-1:1", "--height", "0.25", "--count", "3", "--json");
    expect({status, err}).toEqual({status: 0, err: ""});
    const {eigenvalues, usable} = JSON.parse(out);
    expect(eigenvalues).toHaveLength(3);
    expect(eigenvalues[0]).toBeGreaterThan(eigenvalues[1]);
    expect(eigenvalues[1]).toBeGreaterThan(eigenvalues[2]);
    expect(eigenvalues[2]).toBeGreaterThan(0);
    const many = JSON.parse((await spectrum("--support", "-1:1", "--height", "0.25", "--count", "60", "--json")).out);
    expect(usable).toBe(many.eigenvalues.filter((value: number) => value > 1e-8).length);
    expect(usable).toBeGreaterThan(3);
  });

  test("a leading minus is no option, joined or apart", async () => {
    const apart = await spectrum("--support", "-400:400", "--height", "60", "--json");
    const joined = await spectrum("--support=-400:400", "--height=60", "--json");
    const reordered = await spectrum("--height", "60", "--support", "-400:-0.0e2", "--support", "-400:0");
    expect(apart.status).toBe(0);
    expect(joined).toEqual(apart);
    // The two spellings differ as texts, so they are two values of an option that takes one.
    expect(reordered.err.replaceAll(/\s+/g, " ")).toMatch(/given as "-400:-0.0e2" and as "-400:0"/);
  });

  test("a higher floor leaves fewer modes", async () => {
    const usable = async (floor: string): Promise<number> =>
      JSON.parse((await spectrum("--support", "0:2", "--height", "0.5", "--floor", floor, "--json")).out).usable;
    expect(await usable("0.1")).toBeLessThan(await usable("1e-3"));
  });

  test("the table holds one row a mode and the count above the floor", async () => {
    const {out} = await spectrum("--support", "-1:1", "--height", "1", "--count", "4");
    const lines = out.trimEnd().split("\n");
    expect(lines).toHaveLength(2 + 4 + 1);
    expect(lines[0]).toMatch(/^mode +eigenvalue +rounded$/);
    expect(lines[2]).toMatch(/^ *1 +0\.\d{12} +\d\.\d{3}e[+-]\d+$/);
    expect(lines.at(-1)).toMatch(/^\d+ modes above/);
    for (const line of lines) expect(line.length).toBeLessThanOrEqual(100);
  });

  const refused: readonly [string, string[], RegExp][] = [
    ["no support", ["--height", "1"], /--support is missing.*--support -400:400/s],
    ["no height", ["--support", "0:1"], /--height is missing/],
    ["height 0", ["--support", "0:1", "--height", "0"], /--height "0" is out of range.*above 0/s],
    ["negative height", ["--support", "0:1", "--height", "-2"], /--height "-2" is out of range/],
    ["NaN", ["--support", "0:1", "--height", "NaN"], /--height "NaN" is not a number/],
    ["infinite", ["--support", "0:1", "--height", "1e999"], /not a number/],
    ["end before start", ["--support", "1:-1", "--height", "1"], /ends at or before its start.*-1:1/s],
    ["no length", ["--support", "1:1", "--height", "1"], /ends at or before its start/],
    ["half an interval", ["--support", "1:", "--height", "1"], /not an interval/],
    ["words", ["--support", "a:b", "--height", "1"], /not an interval/],
    ["a group", ["--support", "G2/0:1", "--height", "1"], /there are no lines here/],
    ["count 0", ["--support", "0:1", "--height", "1", "--count", "0"], /--count "0" is out of range.*whole number/s],
    ["count 2.5", ["--support", "0:1", "--height", "1", "--count", "2.5"], /whole number/],
    ["floor 1", ["--support", "0:1", "--height", "1", "--floor", "1"], /between 0 and 1/],
    [
      "an option in place of a value",
      ["--support", "--json", "--height", "1"],
      /--support has no value: --json follows/,
    ],
    [
      "an operand",
      ["--support", "0:1", "--height", "1", "extra"],
      /takes options only, but got "extra"\. Leave it out.*--help/,
    ],
    [
      "an option at the end without its value",
      ["--height", "1", "--support"],
      /--support has no value\. Write it as --support <A:B>\./,
    ],
    ["no options at all", [], /--support is missing.*--support -400:400/],
  ];
  test.each(refused)("refuses %s with exit status 2, a cure and no output", async (_, args, message) => {
    const {status, out, err} = await spectrum(...args);
    expect({status, out}).toEqual({status: 2, out: ""});
    expect(err.replaceAll(/\s+/g, " ")).toMatch(message);
    expect(err).not.toMatch(/\n\s+at /);
  });
});
