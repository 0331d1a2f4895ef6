/** Which runs may share a folder, and what a finished run leaves there. */
import {createHash} from "node:crypto";
import {readFileSync, writeFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {nodeHost} from "../../cli/host.ts";
import type {RunIdentity} from "../../cli/run-difference.ts";
import {openRunFolder} from "../../cli/run-folder.ts";
import type {FileDigest} from "../../lib/products/record.ts";
import {contents, temporaryFolder} from "./harness.ts";

const host = nodeHost();
const identity = (noise: number, sha256 = "aa"): RunIdentity => ({
  settings: {acquisition: {noise}, bound: "rms:0.5"},
  inputs: [{file: "lines.csv", bytes: 3, sha256}],
});

const writes = (name: string): boolean => name.endsWith(".csv");

async function wholeRun(
  out: string,
  run: RunIdentity,
  files: Record<string, string>,
  replace = false,
): Promise<readonly FileDigest[]> {
  const folder = await openRunFolder(host, out, {identity: run, replace, writes});
  try {
    for (const [name, text] of Object.entries(files)) await (await folder.openText(name)).write(text);
    const record = (outputs: readonly FileDigest[]) => JSON.stringify({program: {name: "groundward"}, ...run, outputs});
    return await folder.finish(record, () => "{}");
  } finally {
    await folder.abandon();
  }
}

describe("a run's folder", () => {
  test("holds the files, their digests in the record, and the timing outside it", async () => {
    const out = temporaryFolder();
    const outputs = await wholeRun(out, identity(1), {"source.csv": "line\n", "levels.csv": ""});
    expect(contents(out)).toEqual(["levels.csv", "record.json", "source.csv", "timing.json"]);
    const record = JSON.parse(readFileSync(join(out, "record.json"), "utf8"));
    expect(record.outputs).toEqual(outputs);
    expect(outputs).toEqual([
      {file: "source.csv", bytes: 5, sha256: createHash("sha256").update("line\n").digest("hex")},
      {file: "levels.csv", bytes: 0, sha256: createHash("sha256").update("").digest("hex")},
    ]);
  });

  test("may be written again by the same run without asking", async () => {
    const out = temporaryFolder();
    await wholeRun(out, identity(1), {"source.csv": "old"});
    await wholeRun(out, identity(1), {"source.csv": "new"});
    expect(readFileSync(join(out, "source.csv"), "utf8")).toBe("new");
  });

  test("is refused to a run with other settings or inputs, naming the first difference; nothing changes", async () => {
    const out = temporaryFolder();
    await wholeRun(out, identity(1), {"source.csv": "old"});
    await expect(wholeRun(out, identity(2), {"source.csv": "new"})).rejects.toMatchObject({
      code: "out/other-run",
      exitStatus: 2,
      message: expect.stringMatching(/--noise was "1" and is "2".*--replace/),
    });
    await expect(wholeRun(out, identity(1, "bb"), {"source.csv": "new"})).rejects.toMatchObject({
      code: "out/other-run",
    });
    expect(readFileSync(join(out, "source.csv"), "utf8")).toBe("old");
    expect(contents(out)).toEqual(["record.json", "source.csv", "timing.json"]);
  });

  test("with --replace loses the old run's files, and no others", async () => {
    const out = temporaryFolder();
    await wholeRun(out, identity(1), {"source.csv": "old", "strips.csv": "old"});
    writeFileSync(join(out, "notes.txt"), "mine");
    await wholeRun(out, identity(2), {"source.csv": "new"}, true);
    expect(contents(out)).toEqual(["notes.txt", "record.json", "source.csv", "timing.json"]);
    expect(readFileSync(join(out, "source.csv"), "utf8")).toBe("new");
  });

  test("keeps files of others: one of the same name is refused unless --replace", async () => {
    const out = temporaryFolder();
    writeFileSync(join(out, "source.csv"), "mine");
    await expect(wholeRun(out, identity(1), {"levels.csv": "x", "source.csv": "new"})).rejects.toMatchObject({
      code: "out/foreign-file",
    });
    expect(contents(out)).toEqual(["source.csv"]);
    expect(readFileSync(join(out, "source.csv"), "utf8")).toBe("mine");
    // Refused before the work when the name is foreseen, and at the opening when it is not.
    const early = openRunFolder(host, out, {identity: identity(1), replace: false, writes});
    await expect(early).rejects.toMatchObject({code: "out/foreign-file"});
    const late = await openRunFolder(host, out, {identity: identity(1), replace: false, writes: () => false});
    await expect(late.openText("source.csv")).rejects.toMatchObject({code: "out/foreign-file"});
    await late.abandon();
    await wholeRun(out, identity(1), {"source.csv": "new"}, true);
    expect(readFileSync(join(out, "source.csv"), "utf8")).toBe("new");
  });

  test.each(["not json", "[]", "null", '{"program": {"name": "other"}, "outputs": []}'])(
    "a record.json that is not ours (%s) is a foreign file",
    async (text) => {
      const out = temporaryFolder();
      writeFileSync(join(out, "record.json"), text);
      await expect(wholeRun(out, identity(1), {"source.csv": "x"})).rejects.toMatchObject({code: "out/foreign-file"});
      expect(contents(out)).toEqual(["record.json"]);
      expect(readFileSync(join(out, "record.json"), "utf8")).toBe(text);
    },
  );

  test("a record that names paths outside the folder removes nothing there", async () => {
    const top = temporaryFolder();
    const out = join(top, "out");
    writeFileSync(join(top, "precious.txt"), "mine");
    await wholeRun(out, identity(1), {"source.csv": "old"});
    const record = JSON.parse(readFileSync(join(out, "record.json"), "utf8"));
    record.outputs.push({file: "../precious.txt"}, {file: 3}, null);
    writeFileSync(join(out, "record.json"), JSON.stringify(record));
    await wholeRun(out, identity(2), {"source.csv": "new"}, true);
    expect(contents(top)).toEqual(["out", "precious.txt"]);
  });

  test("a failure on the way, even of the record, leaves nothing", async () => {
    const out = join(temporaryFolder(), "out");
    const folder = await openRunFolder(host, out, {identity: identity(1), replace: false, writes});
    await (await folder.openText("source.csv")).write("x");
    const scratch = await folder.openScratch();
    await scratch.append(new Uint8Array(3));
    const failing = () => {
      throw new Error("invented");
    };
    await expect(folder.finish(failing, () => "{}")).rejects.toThrow("invented");
    await folder.abandon();
    expect(contents(out)).toEqual([]);
  });
});
