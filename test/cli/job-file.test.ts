/** `--job`: settings from a file, and options that win over it. */
import {createHash} from "node:crypto";
import {readFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {contents, fileWith, run, surveyText, temporaryFolder} from "./harness.ts";

const flat = (text: string): string => text.replaceAll(/\s+/g, " ");
const record = (out: string) => JSON.parse(readFileSync(join(out, "record.json"), "utf8"));

/** A folder with `lines.csv` and `survey.toml`; @returns the path of the job file, and that of `out` beside it */
function jobWith(...rows: readonly string[]): {readonly job: string; readonly folder: string; readonly out: string} {
  const folder = temporaryFolder();
  fileWith("lines.csv", surveyText(), folder);
  const job = fileWith("survey.toml", `${rows.join("\n")}\n`, folder);
  return {job, folder, out: join(folder, "out")};
}

const WHOLE = [
  'survey = ["lines.csv"]',
  'observable = "gravity"',
  "noise = 0.02",
  'bound = "rms:0.5"',
  "level = [0, 10]",
  'support = ["-100:300", [400, 700.5]]',
  'out = "out"',
  "[strip]",
  "dyke = [200, 260]",
  '"a=b" = "G1/0:100"',
];

describe("a job file", () => {
  test("does what the same options do, with its digest among the inputs", async () => {
    const {job, folder, out} = jobWith(...WHOLE);
    const result = await run(["continue", "--job", job]);
    expect({status: result.status, err: result.err}).toEqual({status: 0, err: expect.not.stringMatching(/error/)});
    const same = temporaryFolder();
    const options =
      "--observable gravity --noise 0.02 --bound rms:0.5 --level 0 --level 10 --support -100:300 --support 400:700.5 --strip dyke=200:260 --strip a=b=G1/0:100";
    await run(["continue", join(folder, "lines.csv"), ...options.split(" "), "--out", same]);
    for (const name of contents(same).filter((file) => /csv$|html$/.test(file)))
      expect(readFileSync(join(out, name), "utf8")).toBe(readFileSync(join(same, name), "utf8"));
    expect(record(out).settings).toEqual(record(same).settings);
    const text = readFileSync(job);
    const digest = createHash("sha256").update(text).digest("hex");
    expect(record(out).inputs).toEqual([
      ...record(same).inputs,
      {file: "survey.toml", bytes: text.length, sha256: digest},
    ]);
    expect(JSON.stringify(record(out))).not.toContain(folder);
  });

  test("an option on the command line takes the place of the whole key, and so do files", async () => {
    const {job, folder, out} = jobWith(...WHOLE);
    const other = fileWith("other.csv", surveyText(["L9"]));
    const elsewhere = join(folder, "elsewhere");
    const result = await run(["continue", other, "--job", job, "--level", "20", "--out", elsewhere]);
    expect(result.status).toBe(0);
    expect(result.out).toMatch(/^L9 /m);
    expect(contents(out)).toEqual([]);
    const {settings, inputs} = record(elsewhere);
    expect(settings.wanted.levels).toEqual([{height: 20, kind: "above-boundary"}]);
    expect(settings.acquisition.channels[0].noise).toBe(0.02);
    expect(inputs.map(({file}: {file: string}) => file)).toEqual(["other.csv", "survey.toml"]);
  });

  test("numbers and texts, one value and a list of one, lists and tables of pairs mean the same", async () => {
    const spellings = [
      ["noise = 0.02", "level = 10", "regional = 2", "strip = {dyke = [200, 260]}", 'column = {value = "gravity"}'],
      ['noise = "0.02"', 'level = ["10"]', 'regional = "2"', 'strip = ["dyke=200:260"]', 'column = "value=gravity"'],
      ["noise = 2e-2", "level = [1e1]", "regional = 2.0", 'strip.dyke = "200:260"', 'column = ["value=gravity"]'],
    ];
    const settings = [];
    for (const rows of spellings) {
      const {job, out} = jobWith('survey = "lines.csv"', 'observable = "gravity"', 'out = "out"', ...rows);
      expect((await run(["continue", "--job", job])).status).toBe(0);
      settings.push(record(out).settings);
    }
    expect(settings[0].model.regional).toBe(2);
    expect(settings[0].wanted.strips).toEqual([{from: 200, group: null, name: "dyke", to: 260}]);
    expect(settings[1]).toEqual(settings[0]);
    expect(settings[2]).toEqual(settings[0]);
  });

  test("a changed job file is another run, unless replace is on in it", async () => {
    const {job, folder} = jobWith(...WHOLE);
    expect((await run(["continue", "--job", job])).status).toBe(0);
    expect((await run(["continue", "--job", job])).status).toBe(0);
    fileWith("survey.toml", `replace = false\nregional = 0\n${WHOLE.join("\n")}\n`, folder);
    expect(flat((await run(["continue", "--job", job])).err)).toMatch(
      /regional was "1" and is "0".*\[out\/other-run\]/,
    );
    fileWith("survey.toml", `replace = true\nregional = 0\n${WHOLE.join("\n")}\n`, folder);
    expect((await run(["continue", "--job", job])).status).toBe(0);
  });

  test("json and quiet count from the moment the file is read, for errors too", async () => {
    const {job} = jobWith("json = true", ...WHOLE);
    const result = await run(["continue", "--job", job]);
    expect(result.err).toBe("");
    expect(JSON.parse(result.out).lines[0].line).toBe("L1");
    const bad = jobWith("json = true", ...WHOLE, "").job;
    const refused = await run(["continue", "--job", bad, "--noise", "-1"]);
    expect(refused.status).toBe(2);
    expect(JSON.parse(refused.err)).toMatchObject({code: "option/out-of-range"});
    const quiet = await run(["continue", "--job", jobWith("quiet = true", ...WHOLE).job]);
    expect(quiet.err).toBe("");
    const openInput = () => Promise.reject(new TypeError("invented"));
    expect((await run(["continue", "--job", job], {openInput})).status).toBe(1);
  });

  test("inspect takes what concerns it and leaves the rest", async () => {
    const {job} = jobWith(...WHOLE);
    const result = await run(["inspect", "--job", job]);
    expect(result.status).toBe(0);
    expect(result.out).toMatch(/^L1 +G1 +60 /m);
    expect(result.out).toMatch(/mGal/);
  });
});

describe("what is wrong in a job file is refused with file, row and column", () => {
  const SOUND = ['survey = ["lines.csv"]', 'observable = "gravity"', 'out = "out"'];
  interface Bad {
    readonly name: string;
    readonly rows: readonly string[];
    readonly code: string;
    readonly row: number;
    readonly column?: string;
    readonly says: RegExp;
  }
  const cases: readonly Bad[] = [
    {
      name: "a misspelt key",
      rows: ["", "  nois = 0.02"],
      code: "job/unknown-key",
      row: 5,
      column: "3",
      says: /"nois" is no key here\. Nearest is noise\./,
    },
    {
      name: "a misspelt survey",
      rows: ['surveys = "lines.csv"'],
      code: "job/unknown-key",
      row: 4,
      says: /Nearest is survey\./,
    },
    {name: "dashes", rows: ["--noise = 1"], code: "job/unknown-key", row: 4, says: /Nearest is noise.*without dashes/},
    {
      name: "a section",
      rows: ["[model]", "panel = 5"],
      code: "job/unknown-key",
      row: 4,
      says: /Keys stand at the top of the file, in no section/,
    },
    {
      name: "a name that objects have",
      rows: ["toString = 1"],
      code: "job/unknown-key",
      row: 4,
      says: /"toString" is no key here/,
    },
    {
      name: "a job in a job",
      rows: ['job = "other.toml"'],
      code: "job/command-line-only",
      row: 4,
      says: /as --job/,
    },
    {
      name: "a switch as a number",
      rows: ["replace = 1"],
      code: "job/wrong-type",
      row: 4,
      says: /"replace" is 1; true or false was needed/,
    },
    {
      name: "a number as a switch",
      rows: ["noise = true"],
      code: "job/wrong-type",
      row: 4,
      says: /"noise" is true; a standard deviation above 0, or the word record \(0\.02\)/,
    },
    {
      name: "a list for one value",
      rows: ["panel = [5]"],
      code: "job/wrong-type",
      row: 4,
      says: /"panel" is a list/,
    },
    {
      name: "a number for a text",
      rows: ["crs = 32633"],
      code: "job/wrong-type",
      row: 4,
      says: /"crs" is 32633; a text in quotes/,
    },
    {
      name: "a bad entry of a list",
      rows: ["level = [0,", "false]"],
      code: "job/wrong-type",
      row: 4,
      says: /"level" is false; a height in metres/,
    },
    {name: "nothing", rows: ["level = []"], code: "job/wrong-type", row: 4, says: /"level" is an empty list/},
    {name: "an empty text", rows: ['crs = ""'], code: "job/wrong-type", row: 4, says: /"crs" is an empty text/},
    {
      name: "three ends of an interval",
      rows: ["support = [[1, 2, 3]]"],
      code: "job/wrong-type",
      row: 4,
      says: /"support" is a list; an interval/,
    },
    {
      name: "an option that slipped into a section",
      rows: ["[strip]", "dyke = [200, 260]", "", "panel = 5"],
      code: "job/wrong-type",
      row: 7,
      says: /"strip\.panel" is 5; an interval.*If the option panel is meant, move it above the first section/,
    },
    {
      name: "a value out of range",
      rows: ["panel = 5", "noise = -1"],
      code: "option/out-of-range",
      row: 5,
      says: /--noise "-1" is out of range/,
    },
    {name: "not a number", rows: ["noise = nan"], code: "option/not-a-number", row: 4, says: /--noise "NaN"/},
    {
      name: "an interval that ends before it starts",
      rows: ["strip.dyke = [260, 200]"],
      code: "option/end-before-start",
      row: 4,
      says: /--strip dyke=200:260|ends at or before its start/,
    },
    {
      name: "a unit of something else",
      rows: ["panel = 5", 'unit = "nT"'],
      code: "unit/wrong-dimension",
      row: 5,
      says: /"nT" measures field/,
    },
    {
      name: "supports that overlap",
      rows: ['support = ["0:300", "200:400"]'],
      code: "support/overlap",
      row: 4,
      says: /overlap/,
    },
    {name: "an unknown bound", rows: ['bound = "tight"'], code: "bound/unknown", row: 4, says: /tight is not a bound/},
    {
      name: "a text without quotes",
      rows: ["split = auto"],
      code: "toml/syntax",
      row: 4,
      column: "9",
      says: /not TOML.*a text stands in quotes/,
    },
    {name: "a key twice", rows: ["", 'out = "b"'], code: "toml/syntax", row: 5, column: "1", says: /key stands once/},
  ];

  test.each(cases)("$name", async ({rows, code, row, column = "1", says}) => {
    const {job, out} = jobWith(...SOUND, ...rows);
    const people = await run(["continue", "--job", job]);
    expect({status: people.status, out: people.out}).toEqual({status: 2, out: ""});
    expect(flat(people.err)).toMatch(says);
    expect(people.err).toContain(`error: survey.toml:${row}:${column} · `);
    expect(people.err).not.toMatch(/defect|undefined|\[object/);
    const scripts = await run(["continue", "--job", job, "--json"]);
    expect(JSON.parse(scripts.err)).toMatchObject({code, file: "survey.toml", row, column});
    expect(contents(out)).toEqual([]);
  });

  test("an unknown observable, which every option would trip over, is blamed alone", async () => {
    const {job} = jobWith("noise = 1", 'observable = "gravitation"', 'out = "out"', 'survey = "lines.csv"');
    expect((await run(["continue", "--job", job])).err).toMatch(/survey\.toml:2:1/);
    const typed = await run(["continue", "--job", job, "--observable", "gravitas"]);
    expect(typed.err).toMatch(/"gravitas" is not an observable/);
    expect(typed.err).not.toMatch(/survey\.toml/);
  });

  test("an option that is wrong on the command line is not blamed on the file", async () => {
    const {job} = jobWith(...SOUND, "noise = 1");
    const {err} = await run(["continue", "--job", job, "--noise", "-1"]);
    expect(err).toMatch(/--noise "-1" is out of range/);
    expect(err).not.toMatch(/survey\.toml/);
  });

  test("what is missing in both", async () => {
    const none = async (...rows: string[]) => flat((await run(["continue", "--job", jobWith(...rows).job])).err);
    expect(await none('observable = "gravity"', 'out = "out"')).toMatch(/No survey is named.*\[survey\/missing\]/);
    expect(await none('survey = "lines.csv"', 'out = "out"')).toMatch(/--observable is missing/);
    expect(await none('survey = "lines.csv"', 'observable = "gravity"')).toMatch(/--out is missing/);
    expect(await none('survey = "gone.csv"', 'observable = "gravity"', 'out = "out"')).toMatch(
      /There is no .*gone\.csv/,
    );
  });

  test("no such job file; a survey in its place", async () => {
    expect((await run(["continue", "--job", join(temporaryFolder(), "no.toml")])).err).toMatch(/There is no/);
    const {status, err} = await run(["continue", "--job", fileWith("lines.csv", surveyText())]);
    expect(status).toBe(2);
    expect(err).toMatch(/lines\.csv:1:5 · This is not TOML/);
  });
});
