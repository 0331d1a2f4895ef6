/** --tie on the command line. */

import {readFileSync} from "node:fs";
import {join} from "node:path";
import {expect, test} from "vitest";
import {fileWith, run, surveyText, temporaryFolder} from "./harness.ts";

const flat = (text: string): string => text.replace(/\s+/g, " ");

const ASKED = [
  "--observable",
  "gravity",
  "--noise",
  "0.02",
  "--bound",
  "rms:5",
  "--boundary",
  "depth-5",
  "--level",
  "ground+0",
];

async function tied(ties: string) {
  const out = join(temporaryFolder(), "out");
  const result = await run([
    "continue",
    fileWith("lines.csv", surveyText(["L1"])),
    ...ASKED,
    "--tie",
    fileWith("ties.csv", ties),
    "--out",
    out,
  ]);
  return {result, out};
}

test("a tie is met, and its file is among the inputs", async () => {
  const text = surveyText(["L1"]).split("\n")[20]!.split(",");
  const chainage = Number(text[1]);
  const {result, out} = await tied(`line,chainage,elevation,value,tolerance\nL1,${chainage},0,0.7,0\n`);
  expect({status: result.status, err: result.err}).toMatchObject({status: 0});
  const [head, ...rows] = readFileSync(join(out, "levels.csv"), "utf8")
    .trim()
    .split("\n")
    .map((row) => row.split(","));
  const row = rows.find((cells) => Number(cells[head!.indexOf("chainage_m")]) === chainage);
  expect(Number(row![head!.indexOf("field_mGal")])).toBeCloseTo(0.7, 9);
  expect(
    JSON.parse(readFileSync(join(out, "record.json"), "utf8")).inputs.map(({file}: {file: string}) => file),
  ).toContain("ties.csv");
});

test.each([
  ["no value", "line,chainage,elevation\nL1,10,0\n", /no column value/],
  ["text in a number", "line,chainage,elevation,value\nL1,10,0,high\n", /ties\.csv:2:value/],
  ["an empty cell", "line,chainage,elevation,value\nL1,,0,1\n", /needs a number in column chainage/],
  ["a negative tolerance", "line,chainage,elevation,value,tolerance\nL1,10,0,1,-1\n", /tolerance of a tie is -1/],
  ["another kind of source", "line,chainage,elevation,value,observable\nL1,10,0,1,field-vertical\n", /other sources/],
  ["no place", "line,elevation,value\nL1,0,1\n", /chainage, or both x and y/],
  ["a line that is not there", "line,chainage,elevation,value\nL9,10,0,1\n", /names line "L9"/],
])("%s is refused with its place", async (_, ties, says) => {
  const {result} = await tied(ties);
  expect(result.status).toBe(2);
  expect(flat(result.err)).toMatch(says);
  expect(flat(result.err)).toMatch(/ties\.csv/);
});
