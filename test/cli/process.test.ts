/** The compiled program as a process: pipes, signals, permissions and disks. `npm run build` comes before. */
import {type ChildProcess, spawn, spawnSync} from "node:child_process";
import {once} from "node:events";
import {chmodSync, existsSync} from "node:fs";
import {join} from "node:path";
import {fileURLToPath} from "node:url";
import {beforeAll, describe, expect, test} from "vitest";
import {contents, fileWith, gridBytes, surveyText, temporaryFolder} from "./harness.ts";

const MAIN = fileURLToPath(new URL("../../dist/cli/main.js", import.meta.url));
const SETTINGS = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5"];

const shell = (script: string, ...args: string[]) =>
  spawnSync("sh", ["-c", script, "sh", process.execPath, MAIN, ...args], {encoding: "utf8"});

beforeAll(() => {
  if (!existsSync(MAIN)) throw new Error("dist/ is missing: run npm run build first");
});

test("runs, prints and returns its status", () => {
  const version = spawnSync(process.execPath, [MAIN, "--version"], {encoding: "utf8"});
  expect({status: version.status, stderr: version.stderr}).toEqual({status: 0, stderr: ""});
  expect(version.stdout).toMatch(/^\d+\.\d+\.\d+\n$/);
  expect(spawnSync(process.execPath, [MAIN, "no-such-command"]).status).toBe(2);
});

test("--help loads no mathematics and no file format", () => {
  // The loader names every module it opens.
  const trace = spawnSync(process.execPath, ["--experimental-loader", loaderText(), MAIN, "continue", "--help"], {
    encoding: "utf8",
  });
  const loaded = trace.stderr.split("\n").filter((line) => line.startsWith("load "));
  expect(loaded.length).toBeGreaterThan(10);
  expect(
    loaded.filter((line) => /geotiff|proj4|csv-parse|d3-|smol-toml|epsg-table|line-study|piscina/.test(line)),
  ).toEqual([]);
});

/** A module, as a data URL, that tells what is resolved. */
function loaderText(): string {
  const source = `import {writeSync} from "node:fs"; export async function load(url, context, next) { writeSync(2, "load " + url + "\\n"); return next(url, context); }`;
  return `data:text/javascript,${encodeURIComponent(source)}`;
}

test("a closed pipe is no error, and the files are written all the same", () => {
  const out = temporaryFolder();
  const survey = fileWith("lines.csv", surveyText());
  const {status, stderr} = shell(
    '("$@" 2>/dev/null; echo "status $?" >&2) | true',
    "continue",
    survey,
    ...SETTINGS,
    "--out",
    out,
  );
  expect(status).toBe(0);
  expect(stderr).toBe("status 0\n");
  expect(contents(out)).toContain("record.json");
});

test("output that is closed early ends quietly", () => {
  const {stdout, stderr} = shell(
    '("$@"; echo "status $?" >&2) | head -n 1',
    "spectrum",
    "--support",
    "0:1",
    "--height",
    "1",
    "--count",
    "200",
  );
  expect(stdout).toMatch(/^mode/);
  expect(stderr).toBe("status 0\n");
});

test("an input that is a pipe is refused with a cure", () => {
  const {status, stderr} = shell('echo x | "$@"', "continue", "/dev/stdin", ...SETTINGS, "--out", temporaryFolder());
  expect(status).toBe(2);
  expect(stderr.replaceAll(/\s+/g, " ")).toMatch(/not a file.*Save it to a file first/s);
});

describe("when writing fails, status 2 and nothing is left", () => {
  test("a file outgrows its limit", () => {
    // 16 blocks of 512 bytes: the real refusal of the system in the middle of a file, without privileges.
    const folder = temporaryFolder();
    const out = join(folder, "out");
    const survey = fileWith("lines.csv", surveyText());
    const {status, stdout, stderr} = shell('ulimit -f 16; exec "$@"', "continue", survey, ...SETTINGS, "--out", out);
    expect({status, stdout}).toEqual({status: 2, stdout: ""});
    expect(stderr.replaceAll(/\s+/g, " ")).toMatch(
      /outgrew the largest file allowed here.*--out; no result file was written/,
    );
    expect(stderr).not.toMatch(/\n\s+at /);
    expect(contents(folder)).toEqual([]);
  });

  test("the folder may not be written to", () => {
    const out = temporaryFolder();
    chmodSync(out, 0o555);
    const survey = fileWith("lines.csv", surveyText());
    chmodSync(join(survey, ".."), 0o755);
    // Root may write anywhere: the run is then that of another user (65534, nobody), who still reads the program.
    const user = process.getuid?.() === 0 ? {uid: 65_534, gid: 65_534} : {};
    const args = [MAIN, "continue", survey, ...SETTINGS, "--out", out];
    const {status, stderr} = spawnSync(process.execPath, args, {encoding: "utf8", ...user});
    expect(status).toBe(2);
    expect(stderr.replaceAll(/\s+/g, " ")).toMatch(
      /Permission was refused for .*Change its permissions, or choose another place/,
    );
    expect(contents(out)).toEqual([]);
    chmodSync(out, 0o755);
  });
});

describe.each(["SIGINT", "SIGTERM"] as const)("%s", (signal) => {
  test("ends the run with 130 and keeps finished lines only, from which the same command goes on", async () => {
    const folder = temporaryFolder();
    const out = join(folder, "out");
    // Enough lines that the first ones are done long before the last.
    const names = Array.from({length: 80}, (_, i) => `L${i}`);
    const survey = fileWith("lines.csv", surveyText(names));
    const child: ChildProcess = spawn(process.execPath, [MAIN, "continue", survey, ...SETTINGS, "--out", out], {
      stdio: ["ignore", "pipe", "pipe"],
    });
    let err = "";
    let sent = false;
    child.stderr!.on("data", (data) => {
      err += data;
      if (!sent && /20 of 80/.test(err)) sent = child.kill(signal);
    });
    const [status] = await once(child, "close");
    expect(status).toBe(130);
    const [, kept] = /interrupted: (\d+) of 80 lines are kept in .*\.groundward-run; the same command goes on/.exec(
      err,
    )!;
    expect(Number(kept)).toBeGreaterThanOrEqual(20);
    expect(contents(out)).toEqual([".groundward-run"]);
    const again = spawnSync(process.execPath, [MAIN, "continue", survey, ...SETTINGS, "--out", out], {
      encoding: "utf8",
    });
    expect(again.status).toBe(0);
    expect(again.stderr).toContain(`${kept} of 80 lines were finished before and are taken over.`);
    expect(contents(out)).not.toContain(".groundward-run");
  });
});

test("a grid that is interrupted leaves nothing", async () => {
  const out = join(temporaryFolder(), "out");
  const survey = fileWith("grid.tif", gridBytes(60, 400));
  const args = ["continue", survey, "--observable", "field-vertical", "--clearance", "60", "--noise", "1"];
  const child = spawn(process.execPath, [MAIN, ...args, "--out", out], {stdio: ["ignore", "ignore", "pipe"]});
  let sent = false;
  child.stderr.on("data", (data) => {
    if (!sent && /of 400 rows/.test(String(data))) sent = child.kill("SIGINT");
  });
  const [status] = await once(child, "close");
  expect(status).toBe(130);
  expect(contents(out)).toEqual([]);
});
