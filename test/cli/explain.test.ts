/** `continue --explain`: every setting, its origin and the reason of its default; and the entries it reads. */
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {JOB_ENTRIES} from "../../cli/options/continue-options.ts";
import {settingsFrom} from "../../cli/options/settings.ts";
import {contents, fileWith, run, temporaryFolder} from "./harness.ts";

interface Setting {
  readonly name: string;
  readonly value: unknown;
  readonly from: string;
  readonly row?: number;
  readonly default: unknown;
  readonly why: string;
}
async function explained(...args: readonly string[]): Promise<ReadonlyMap<string, Setting>> {
  const {status, out, err} = await run(["continue", ...args, "--explain", "--json"]);
  expect({status, err}).toEqual({status: 0, err: ""});
  return new Map(JSON.parse(out).settings.map((setting: Setting) => [setting.name, setting]));
}
const JOB = 'observable = "gravity"\nnoise = 0.02\n\nlevel = [0, 10]\nout = "out"\nreplace = false\n';

describe("--explain", () => {
  test("tells every option of a job file, and nothing is run", async () => {
    const folder = temporaryFolder();
    const settings = await explained("--job", fileWith("survey.toml", JOB, folder), "no-such-file.csv");
    expect([...settings.keys()]).toEqual(JOB_ENTRIES.map(({name}) => name));
    expect(contents(folder)).toEqual(["survey.toml"]);
  });

  test("names value, origin and row", async () => {
    const folder = temporaryFolder();
    const job = fileWith("survey.toml", JOB, folder);
    const settings = await explained("lines.csv", "--job", job, "--noise", "0.5", "--quiet");
    expect(settings.get("survey")).toMatchObject({value: ["lines.csv"], from: "option"});
    expect(settings.get("noise")).toMatchObject({value: ["0.5"], from: "option"});
    expect(settings.get("quiet")).toMatchObject({value: true, from: "option", default: false});
    expect(settings.get("level")).toMatchObject({value: ["0", "10"], from: "file", row: 4, default: "0"});
    expect(settings.get("replace")).toMatchObject({value: false, from: "file", row: 6});
    expect(settings.get("out")).toMatchObject({value: join(folder, "out"), from: "file", row: 5, default: null});
    expect(settings.get("confidence")).toMatchObject({value: "0.95", from: "default", default: "0.95"});
    // The unit follows the observable.
    expect(settings.get("unit")).toMatchObject({value: "mGal", from: "default"});
    expect((await explained("--observable", "field-vertical")).get("unit")?.value).toBe("nT");
  });

  test("a table for people, no wider than the screen, with every reason in it", async () => {
    const job = fileWith("survey.toml", JOB);
    const {status, out, err} = await run(["continue", "--job", job, "--level", "20", "--explain"]);
    expect({status, err}).toEqual({status: 0, err: ""});
    for (const line of out.split("\n")) expect(line.length).toBeLessThanOrEqual(100);
    expect(out).toMatch(/^Settings in the file: survey\.toml$/m);
    expect(out).toMatch(/^noise +file, row 2 +0\.02$/m);
    expect(out).toMatch(/^level +option +20$/m);
    expect(out).toMatch(/^regional +default +1$/m);
    expect(out).toMatch(/^survey +default +must be given$/m);
    const flat = out.replaceAll(/\s+/g, " ");
    for (const entry of JOB_ENTRIES) expect(flat).toContain((entry.required ?? entry.default?.reason)!);
  });

  test("settings that a run would refuse are refused, with or without an observable", async () => {
    const job = fileWith("survey.toml", "confidence = 95\n");
    for (const args of [["--observable", "gravity"], []]) {
      const {status, out, err} = await run(["continue", "--job", job, ...args, "--explain"]);
      expect({status, out}).toEqual({status: 2, out: ""});
      expect(err).toMatch(/survey\.toml:1:1 · --confidence "95" is out of range/);
    }
  });
});

describe("entries", () => {
  test("every one has a default with its reason, or the reason why it has none", () => {
    for (const {name, default: fallback, required} of JOB_ENTRIES) {
      expect({name, both: (fallback === undefined) === (required === undefined)}).toEqual({name, both: false});
      expect((fallback?.reason ?? required)!.length).toBeGreaterThan(10);
    }
  });

  test("a default that is a value is the one in force", () => {
    const asked = (name: string, value: string) =>
      settingsFrom(
        new Map([
          ["observable", ["gravity"]],
          [name, [value]],
        ]),
      );
    const plain = JSON.stringify(settingsFrom(new Map([["observable", ["gravity"]]])));
    // Those that settings hold; others are filled in where the survey is known.
    const names = ["sensor-offset", "profiles", "bound", "regional", "level", "confidence"];
    const values = JOB_ENTRIES.filter(({name}) => names.includes(name)).map(({name, default: fallback}) => [
      name,
      fallback?.value,
    ]);
    expect(values).toHaveLength(names.length);
    for (const [name, value] of values) expect(JSON.stringify(asked(name!, value!))).toBe(plain);
  });

  test("help tells the defaults", async () => {
    const help = (await run(["continue", "--help"])).out.replaceAll(/\s+/g, " ");
    for (const {value, default: fallback} of JOB_ENTRIES)
      if (value !== undefined && fallback !== undefined) expect(help).toContain(`default: ${fallback.value}`);
  });
});
