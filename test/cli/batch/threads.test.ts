/** The compiled program on several threads: equal bytes, and runs that are killed. `npm run build` comes before. */
import {spawn, spawnSync} from "node:child_process";
import {createHash} from "node:crypto";
import {once} from "node:events";
import {existsSync, readdirSync, readFileSync} from "node:fs";
import {join} from "node:path";
import {fileURLToPath} from "node:url";
import {expect, test} from "vitest";
import {seededRandom} from "../../../lib/numeric/random.ts";
import {contents, fileWith, gridBytes, surveyText, temporaryFolder} from "../harness.ts";

const MAIN = fileURLToPath(new URL("../../../dist/cli/main.js", import.meta.url));
const LINES = 24;
const PARTS = ".groundward-run";

/** Line L7 flies below the boundary and fails. */
const text = surveyText(
  Array.from({length: LINES}, (_, i) => `L${i}`),
  40,
).replaceAll(/^L7,(\d+),30,/gm, "L7,$1,-30,");

const args = (survey: string, out: string, workers: number): string[] => [
  MAIN,
  "continue",
  survey,
  ...["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5", "--strip", "dyke=200:260"],
  ...["--workers", `${workers}`, "--out", out],
];

const digests = (folder: string): Record<string, string> =>
  Object.fromEntries(
    readdirSync(folder)
      .filter((name) => name !== "timing.json")
      .sort()
      .map((name) => [
        name,
        createHash("sha256")
          .update(readFileSync(join(folder, name)))
          .digest("hex"),
      ]),
  );

/** Lines that a journal in the folder tells of, cut records left out. */
function noted(out: string): Set<number> {
  const places = new Set<number>();
  const parts = join(out, PARTS);
  for (const name of contents(parts).filter((entry) => entry.startsWith("journal-")))
    for (const record of readFileSync(join(parts, name), "utf8").split("\n"))
      if (record.endsWith("}")) places.add(JSON.parse(record).index);
  return places;
}

test("any number of threads gives the same bytes, and a run killed at any moment goes on to them", async () => {
  if (!existsSync(MAIN)) throw new Error("dist/ is missing: run npm run build first");
  const survey = fileWith("lines.csv", text);
  const whole = (workers: number): Record<string, string> => {
    const out = temporaryFolder();
    const {status, stderr} = spawnSync(process.execPath, args(survey, out, workers), {encoding: "utf8"});
    expect(status).toBe(5);
    expect(stderr).toMatch(/line L7 · The station in row/);
    return digests(out);
  };
  const undisturbed = whole(1);
  expect(Object.keys(undisturbed)).toEqual([
    "levels.csv",
    "lines.csv",
    "record.json",
    "report.html",
    "source.csv",
    "strips.csv",
    "tradeoff.csv",
  ]);
  for (const workers of [2, 3]) expect(whole(workers)).toEqual(undisturbed);

  for (const seed of [1, 2]) {
    const {uniform} = seededRandom(seed);
    const out = temporaryFolder();
    // The last one dies when every line is finished and the files are being written.
    const least = seed === 2 ? LINES : 2 + Math.floor(uniform() * 12);
    const child = spawn(process.execPath, args(survey, out, 2), {stdio: ["ignore", "ignore", "pipe"]});
    let told = 0;
    let err = "";
    child.stderr.on("data", (data) => {
      err += data;
      const [last] = [...err.matchAll(/(\d+) of 24 lines[,\n]/g)].slice(-1);
      if (told >= least || last === undefined) return;
      told = Number(last[1]);
      if (told >= least) setTimeout(() => child.kill("SIGKILL"), 20 * uniform());
    });
    await once(child, "close");
    const kept = noted(out);
    expect(kept.size).toBeGreaterThanOrEqual(least);
    expect(contents(out).filter((name) => !name.startsWith("."))).toEqual([]);
    // What is lost are lines in flight: two threads, two lines at most.
    const parcels = contents(join(out, PARTS)).filter((name) => name.endsWith(".parcel"));
    expect(parcels.length - kept.size).toBeLessThanOrEqual(2);
    const {status, stderr} = spawnSync(process.execPath, args(survey, out, 3), {encoding: "utf8"});
    expect(status).toBe(5);
    expect(stderr).toContain(`${kept.size} of ${LINES} lines were finished before and are taken over.`);
    expect(digests(out)).toEqual(undisturbed);
  }
}, 300_000);

test("rows of a grid are the same bytes by any number of threads", () => {
  // Rows from 600 pixels on go to threads.
  const grid = fileWith("grid.tif", gridBytes(640, 6));
  const whole = (workers: number): Record<string, string> => {
    const out = temporaryFolder();
    const asked = ["--observable", "field-vertical", "--clearance", "60", "--noise", "1", "--bound", "rms:200"];
    const levels = ["--level", "0", "--level", "40", "--workers", `${workers}`];
    const {status, stderr} = spawnSync(process.execPath, [MAIN, "continue", grid, ...asked, ...levels, "--out", out], {
      encoding: "utf8",
    });
    expect({status, error: /error/.exec(stderr)}).toEqual({status: 0, error: null});
    return digests(out);
  };
  const alone = whole(1);
  expect(Object.keys(alone)).toContain("level_40_rowwise.tif");
  expect(whole(3)).toEqual(alone);
});
