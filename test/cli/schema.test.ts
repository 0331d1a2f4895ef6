/** `schema`: the JSON Schema of a job file, judged by an independent validator, and against what the program accepts. */
import {Ajv2020} from "ajv/dist/2020.js";
import {describe, expect, test} from "vitest";
import {JOB_ENTRIES} from "../../cli/options/continue-options.ts";
import {readToml} from "../../lib/formats/toml.ts";
import {fileWith, run} from "./harness.ts";

const {status, out, err} = await run(["schema"]);
// strict refuses keywords that the draft does not know; union types and the like are not used.
const validate = new Ajv2020({strict: true, allErrors: true}).compile(JSON.parse(out));

/** Whether the schema accepts a job file. */
async function fits(toml: string): Promise<boolean> {
  const bytes = new TextEncoder().encode(toml);
  const {values} = await readToml({name: "a.toml", size: bytes.length, read: async () => bytes});
  return validate(values);
}
/** Whether the program does. */
const accepted = async (toml: string): Promise<boolean> =>
  (await run(["continue", "--job", fileWith("a.toml", toml), "--explain"])).status === 0;

test("is one JSON document of draft 2020-12 with a description for every key", () => {
  expect({status, err}).toEqual({status: 0, err: ""});
  const schema = JSON.parse(out);
  expect(schema.$schema).toBe("https://json-schema.org/draft/2020-12/schema");
  expect(Object.keys(schema.properties)).toEqual(JOB_ENTRIES.map(({name}) => name));
  for (const {description} of Object.values<{description: string}>(schema.properties))
    expect(description.length).toBeGreaterThan(20);
});

const ALL = `
survey = ["lines.csv", "more.csv"]
clearance = 60
sensor-offset = -3
elevation-datum = "ellipsoid"
crs = "EPSG:32633"
split = "auto"
profiles = "columns"
observable = "gravity"
unit = "uGal"
noise = "record"
processing = "drift removed"
boundary = "depth-5"
support = ["400:900", [1000, 1100.5], "G2/-50:50"]
bound = "rms:0.5"
regional = "none"
panel = 5
level = [0, 10, "ground+2.5"]
confidence = 0.9
out = "out"
replace = true
json = false
[column]
value = "residual"
line = "LN"
[strip]
dyke = [600, 700]
"sill two" = "G2/800:850"
`;

describe("schema and program agree on", () => {
  const cases: readonly (readonly [string, boolean])[] = [
    ['observable = "gravity"', true],
    ["noise = 0.02", true],
    ['noise = "0.02"', true],
    ['bound = "norm:3"', true],
    ['bound = "discrepancy"', true],
    ["boundary = -2000", true],
    ["support = [400, 900]", true],
    ['support = "400:900"', true],
    ['strip = ["dyke=600:700"]', true],
    ['strip = "a=b=600:700"', true],
    ['column = ["value=g=z"]', true],
    ["regional = 3", true],
    ["level = 0", true],
    // One mistake each.
    ["nois = 0.02", false],
    ["Noise = 0.02", false],
    ["[model]\npanel = 5", false],
    ["explain = true", false],
    ['job = "a.toml"', false],
    ["noise = 0", false],
    ["noise = true", false],
    ["noise = [1]", true],
    ["panel = [1]", false],
    ['noise = "records"', false],
    ["clearance = -1", false],
    ["panel = 0", false],
    ["regional = 4", false],
    ["regional = 1.5", false],
    ["confidence = 1", false],
    ["confidence = 95", false],
    ["level = -1", false],
    ["level = []", false],
    ['level = ["ground-3"]', false],
    ['boundary = "deep"', false],
    ['observable = "gravitation"', false],
    ['observable = "gravity"\nunit = "mgal"', false],
    ['split = "line"', false],
    ['support = ["400"]', false],
    ["support = [1, 2, 3]", false],
    ["strip = {}", false],
    ["strip = {dyke = 5}", false],
    ['strip = {dyke = "600"}', false],
    ['strip = "600:700"', false],
    ['strip = [{dyke = "600:700"}]', false],
    ['column = {hight = "h"}', false],
    ['column = "value"', false],
    ["crs = 32633", false],
    ['crs = ""', false],
    ["replace = 1", false],
    ['replace = "yes"', false],
    ['observable = "gravity"\nbound = "tight"', false],
  ];
  test("a file that holds everything", async () => {
    expect({schema: await fits(ALL), program: await accepted(ALL)}).toEqual({schema: true, program: true});
    // One letter too many spoils it.
    expect(await fits(ALL.replace("noise", "noises"))).toBe(false);
  });

  test.each(cases)("%s: %s", async (toml, good) => {
    expect({schema: await fits(toml), program: await accepted(toml)}).toEqual({schema: good, program: good});
  });
});

test("what one key alone does not show is for the program to refuse", async () => {
  for (const toml of [
    "support = [900, 400]",
    'support = ["0:300", "200:400"]',
    'observable = "gravity"\nunit = "nT"',
  ]) {
    expect(await fits(toml)).toBe(true);
    expect(await accepted(toml)).toBe(false);
  }
});
