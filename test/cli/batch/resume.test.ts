/** Runs that go on: what is taken over, what is computed again, what is refused, and shards. One process, no threads. */
import {createHash} from "node:crypto";
import {appendFileSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync} from "node:fs";
import {hostname} from "node:os";
import {join} from "node:path";
import {beforeAll, describe, expect, test} from "vitest";
import {nodeHost} from "../../../cli/host.ts";
import type {Host} from "../../../cli/nouns.ts";
import {contents, fileWith, run, surveyText, temporaryFolder} from "../harness.ts";

const SETTINGS = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5", "--strip", "dyke=200:260"];
const NAMES = ["A", "B", "C", "D", "E", "F", "G"];
const PARTS = ".groundward-run";

/** The survey of these tests; line D flies below the boundary and fails. */
const text = (): string => surveyText(NAMES, 30).replaceAll(/^D,(\d+),30,/gm, "D,$1,-30,");

/** Every file but the timing, by digest. */
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

/** A machine whose disk ends after so many parcels, as a run that dies does. */
function dyingAfter(parcels: number): Partial<Host> {
  const {openStore} = nodeHost();
  let left = parcels;
  return {
    openStore: (path) => {
      const store = openStore(path);
      return {
        ...store,
        writeWhole: (name, bytes) => {
          if (name.endsWith(".parcel") && left-- <= 0) throw new Error("died");
          return store.writeWhole(name, bytes);
        },
      };
    },
  };
}

/** A machine that never gives a parcel back: every line is computed where it is written. */
const withoutParcels = (): Partial<Host> => {
  const {openStore} = nodeHost();
  return {
    openStore: (path) => {
      const store = openStore(path);
      return {...store, read: async (name) => (name.endsWith(".parcel") ? undefined : store.read(name))};
    },
  };
};

let survey: string;
let undisturbed: Record<string, string>;
beforeAll(async () => {
  const folder = temporaryFolderForAll();
  survey = join(folder, "lines.csv");
  writeFileSync(survey, text());
  const {status} = await run(["continue", survey, ...SETTINGS, "--out", join(folder, "out")]);
  expect(status).toBe(5);
  undisturbed = digests(join(folder, "out"));
  return () => rmSync(folder, {recursive: true});
});

function temporaryFolderForAll(): string {
  const folder = join(process.env["TMPDIR"] ?? "/tmp", `groundward-test-resume-${process.pid}`);
  mkdirSync(folder, {recursive: true});
  return folder;
}

const again = (out: string, ...more: string[]) => run(["continue", survey, ...SETTINGS, "--out", out, ...more]);

/** A folder with a run that died after `finished` lines. */
async function brokenOff(finished = 4): Promise<string> {
  const out = join(temporaryFolder(), "out");
  const {status} = await run(["continue", survey, ...SETTINGS, "--out", out], dyingAfter(finished));
  expect(status).toBe(1);
  expect(contents(out)).toEqual([PARTS]);
  return out;
}

describe("files from parcels", () => {
  test("are those that the lines themselves give", async () => {
    const out = temporaryFolder();
    expect((await run(["continue", survey, ...SETTINGS, "--out", out], withoutParcels())).status).toBe(5);
    expect(digests(out)).toEqual(undisturbed);
    expect(Object.keys(undisturbed)).toContain("record.json");
  });
});

describe("a run that was broken off", () => {
  test("goes on, says how many lines it took over, and ends in the same bytes", async () => {
    const out = await brokenOff();
    const {status, err} = await again(out);
    expect(status).toBe(5);
    expect(err).toContain("4 of 7 lines were finished before and are taken over.");
    expect(err).toContain("3 of 3 lines: G");
    expect(digests(out)).toEqual(undisturbed);
  });

  test("computes a spoilt or lost parcel again, and passes over a record cut by the crash", async () => {
    const out = await brokenOff();
    const parts = join(out, PARTS);
    const parcel = readFileSync(join(parts, "line-1.parcel"));
    parcel[parcel.length >> 1]! ^= 1;
    writeFileSync(join(parts, "line-1.parcel"), parcel);
    rmSync(join(parts, "line-2.parcel"));
    const journal = contents(parts).find((name) => name.startsWith("journal-"))!;
    appendFileSync(join(parts, journal), '{"index":5,"line":"F","sta');
    const {status, err} = await again(out);
    expect(status).toBe(5);
    expect(err).toContain("2 of 7 lines were finished before");
    expect(digests(out)).toEqual(undisturbed);
  });

  test("is not mixed with other inputs or settings; --replace begins afresh", async () => {
    const out = await brokenOff();
    const other = await run(["continue", survey, ...SETTINGS, "--noise", "0.02", "--regional", "0", "--out", out]);
    expect(other.status).toBe(2);
    expect(other.err.replaceAll(/\s+/g, " ")).toMatch(
      /holds finished lines of another run \(--regional was "1" and is "0"\).*--replace.*\[out\/other-begun\]/,
    );
    const changed = fileWith("lines.csv", text().replace("A,0,30,", "A,0,31,"));
    const onChanged = (...more: string[]) => run(["continue", changed, ...SETTINGS, "--out", out, ...more]);
    const refused = await onChanged();
    expect(refused.status).toBe(2);
    expect(refused.err.replaceAll(/\s+/g, " ")).toContain('"lines.csv" has changed since');
    expect(contents(out)).toEqual([PARTS]);
    const afresh = await onChanged("--replace");
    expect(afresh.status).toBe(5);
    expect(afresh.err).not.toContain("taken over");
    expect(digests(out)["levels.csv"]).not.toBe(undisturbed["levels.csv"]);
  });

  test("another version of the program begins afresh too", async () => {
    const out = await brokenOff();
    const newer = await run(["continue", survey, ...SETTINGS, "--out", out], {version: "99.0.0"});
    expect(newer.status).toBe(2);
    expect(newer.err.replaceAll(/\s+/g, " ")).toMatch(/by another version of Groundward or of Node/);
  });
});

describe("shards", () => {
  const shard = (out: string, which: string) => run(["continue", survey, ...SETTINGS, "--shard", which, "--out", out]);
  const gather = (out: string, ...more: string[]) => run(["gather", "--out", out, ...more]);

  test("in any order, gathered, give the bytes of one run", async () => {
    const out = join(temporaryFolder(), "out");
    for (const which of ["3/3", "1/3"]) {
      const {status, out: said} = await shard(out, which);
      expect(status).toBe(0);
      expect(said).toMatch(new RegExp(`^shard ${which}: . of 7 lines, . computed now, 0 before, . failed`));
    }
    expect(contents(out)).toEqual([PARTS]);
    const early = await gather(out);
    expect(early.status).toBe(2);
    expect(early.err.replaceAll(/\s+/g, " ")).toMatch(
      /2 of 7 lines are not finished: by their place in the survey 2, 5\. .*\[gather\/incomplete\]/,
    );
    expect((await shard(out, "2/3")).out).toMatch(/2 of 7 lines, 2 computed now, 0 before, 0 failed/);
    expect((await shard(out, "2/3")).out).toMatch(/2 of 7 lines, 0 computed now, 2 before, 0 failed/);
    const {status, out: table} = await gather(out);
    expect(status).toBe(5);
    expect(table).toMatch(/^line .*status/);
    expect(digests(out)).toEqual(undisturbed);
    const again = (await gather(out)).err.replaceAll(/\s+/g, " ");
    expect(again).toMatch(/the files of a run are complete.*\[gather\/nothing\]/);
    expect(digests(out)).toEqual(undisturbed);
  });

  test("are gathered where the survey has moved, but not from another one", async () => {
    const folder = temporaryFolder();
    const [before, out] = [join(folder, "lines.csv"), join(folder, "out")];
    writeFileSync(before, text());
    await run(["continue", before, ...SETTINGS, "--shard", "1/1", "--out", out]);
    rmSync(before);
    expect((await gather(out)).err).toContain("[host/not-found]");
    const other = await gather(out, fileWith("lines.csv", text().replace("A,0,30,", "A,0,31,")));
    expect(other).toMatchObject({status: 2});
    expect(other.err).toContain("[gather/changed]");
    expect((await gather(out, survey)).status).toBe(5);
    expect(digests(out)).toEqual(undisturbed);
  });

  test("begin afresh with --replace, but not while shards of the other run are at work", async () => {
    const out = join(temporaryFolder(), "out");
    const other = ["continue", survey, ...SETTINGS, "--regional", "0", "--shard", "2/2", "--out", out];
    expect((await shard(out, "1/2")).status).toBe(0);
    expect((await run(other)).err).toContain("[out/other-begun]");
    writeFileSync(join(out, PARTS, "shard-1-of-2.lock"), JSON.stringify({pid: 1, machine: hostname()}));
    expect((await run([...other, "--replace"])).err).toContain("[host/run-in-progress]");
    rmSync(join(out, PARTS, "shard-1-of-2.lock"));
    expect((await run([...other, "--replace"])).out).toMatch(/3 of 7 lines, 3 computed now/);
    expect((await gather(out)).err.replaceAll(/\s+/g, " ")).toMatch(/4 of 7 lines are not finished/);
  });

  test("nothing to gather, or a shard that is none, is refused", async () => {
    const nothing = (await gather(temporaryFolder())).err;
    expect(nothing).toContain("[gather/nothing]");
    expect(nothing).not.toContain("complete");
    for (const which of ["0/3", "4/3", "1", "1/0", "1/x"])
      expect((await shard(join(temporaryFolder(), "out"), which)).err).toContain("[option/not-a-shard]");
  });

  test("at work keep others out; a lock of a process that ended does not", async () => {
    const out = temporaryFolder();
    const lock = (pid: number, machine: string) => {
      mkdirSync(join(out, PARTS), {recursive: true});
      writeFileSync(join(out, PARTS, "shard-1-of-2.lock"), JSON.stringify({pid, machine}));
    };
    // Process 1 is always there; nothing is known of another machine's.
    for (const [pid, machine] of [
      [1, hostname()],
      [2 ** 30, `not-${hostname()}`],
    ] as const) {
      lock(pid, machine);
      for (const result of [await shard(out, "1/2"), await again(out)]) {
        expect(result.status).toBe(2);
        expect(result.err).toContain("[host/run-in-progress]");
      }
    }
    expect((await shard(out, "2/2")).status).toBe(0);
    // Beyond the largest process number of Linux (2^22).
    lock(2 ** 30, hostname());
    expect((await shard(out, "1/2")).status).toBe(0);
    expect((await gather(out)).status).toBe(5);
  });
});
