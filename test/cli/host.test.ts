/** The machine: files that appear whole or not at all. */
import {createHash} from "node:crypto";
import {existsSync, mkdirSync, readFileSync, writeFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {nodeHost} from "../../cli/host.ts";
import {asking} from "../../cli/refusals.ts";
import {InputError} from "../../lib/errors.ts";
import {contents, fileWith, temporaryFolder} from "./harness.ts";

const host = nodeHost();
const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);

describe("an input file", () => {
  test("is read at any place, short where it ends", async () => {
    const path = fileWith("a.csv", "0123456789");
    const file = await host.openInput(path);
    expect({name: file.name, size: file.size}).toEqual({name: path, size: 10});
    expect(Buffer.from(await file.read(3, 4)).toString()).toBe("3456");
    expect(Buffer.from(await file.read(8, 10)).toString()).toBe("89");
    expect((await file.read(10, 5)).length).toBe(0);
    expect((await file.read(50, 5)).length).toBe(0);
    await file.close();
  });

  test("that is missing, a folder or a device is refused by name", async () => {
    const folder = temporaryFolder();
    await expect(host.openInput(join(folder, "no.csv"))).rejects.toMatchObject({code: "host/not-found"});
    await expect(host.openInput(folder)).rejects.toMatchObject({code: "host/is-a-folder", place: {file: folder}});
    await expect(host.openInput("/dev/null")).rejects.toMatchObject({code: "host/not-a-file"});
    await expect(host.openInput(join(fileWith("a", "x"), "b"))).rejects.toBeInstanceOf(InputError);
  });
});

describe("an output folder", () => {
  // There /proc refuses new folders as "not there", which a recursive request asks for again without end.
  test.runIf(existsSync("/proc/self"))(
    "that the system refuses as not there is told, not asked for again",
    async () => {
      for (const path of ["/proc/none", "/proc/none/below"])
        await expect(host.openOutput(path)).rejects.toMatchObject({code: "host/not-found"});
    },
  );

  test("is made with its parents, and its files appear together at commit", async () => {
    const out = join(temporaryFolder(), "a", "b");
    const folder = await host.openOutput(out);
    const file = await folder.create("x.csv");
    // Longer than the buffer, in pieces that do not divide it.
    const piece = bytes("0123456789abc".repeat(1000));
    for (let i = 0; i < 40; ++i) await file.write(piece);
    const expected = Buffer.concat(Array.from({length: 40}, () => piece));
    expect(await file.close()).toEqual({
      bytes: expected.length,
      sha256: createHash("sha256").update(expected).digest("hex"),
    });
    expect(contents(out)).toEqual([".unfinished"]);
    await folder.commit([]);
    expect(contents(out)).toEqual(["x.csv"]);
    expect(readFileSync(join(out, "x.csv")).equals(expected)).toBe(true);
    await folder.abandon();
    expect(contents(out)).toEqual(["x.csv"]);
  });

  test("a buffer that the caller uses again is copied", async () => {
    const out = temporaryFolder();
    const folder = await host.openOutput(out);
    const file = await folder.create("x.txt");
    const buffer = bytes("first ");
    await file.write(buffer);
    buffer.set(bytes("second"));
    await file.write(buffer);
    await file.close();
    await folder.commit([]);
    expect(readFileSync(join(out, "x.txt"), "utf8")).toBe("first second");
  });

  test("abandoned, leaves what stood there and removes what was made", async () => {
    const top = temporaryFolder();
    writeFileSync(join(top, "keep.txt"), "old");
    const inPlace = await host.openOutput(top);
    await (await inPlace.create("keep.txt")).write(bytes("new"));
    await inPlace.abandon();
    expect(contents(top)).toEqual(["keep.txt"]);
    expect(readFileSync(join(top, "keep.txt"), "utf8")).toBe("old");
    const made = await host.openOutput(join(top, "a", "b"));
    await made.create("x.csv");
    await made.abandon();
    expect(existsSync(join(top, "a"))).toBe(false);
  });

  test("commit removes the stale files it is told of, and only plain names", async () => {
    const top = temporaryFolder();
    const out = join(top, "out");
    mkdirSync(out);
    for (const path of ["out/old.csv", "out/same.csv", "out/other.txt", "outside.txt"])
      writeFileSync(join(top, path), "old");
    const folder = await host.openOutput(out);
    expect(folder.before).toEqual(["old.csv", "other.txt", "same.csv"]);
    const file = await folder.create("same.csv");
    await file.write(bytes("new"));
    await file.close();
    await folder.commit(["old.csv", "same.csv", "../outside.txt"]);
    expect(contents(out)).toEqual(["other.txt", "same.csv"]);
    expect(readFileSync(join(out, "same.csv"), "utf8")).toBe("new");
    expect(existsSync(join(top, "outside.txt"))).toBe(true);
  });

  test.each(["../x.csv", "a/b.csv", ".hidden", "", ".."])("the name %j is a defect, not a path", async (name) => {
    const folder = await host.openOutput(temporaryFolder());
    await expect(folder.create(name)).rejects.toThrow(/no name for a file of a run/);
    await folder.abandon();
  });

  test("below a file, or a file itself, it is refused with nothing left", async () => {
    const file = fileWith("a.txt", "text");
    await expect(host.openOutput(join(file, "out"))).rejects.toMatchObject({code: "host/not-a-folder"});
    await expect(host.openOutput(file)).rejects.toMatchObject({code: "host/not-a-folder"});
    expect(readFileSync(file, "utf8")).toBe("text");
  });

  test("claimed by a run that is on is refused; one left behind by a dead run is taken over", async () => {
    const out = temporaryFolder();
    mkdirSync(join(out, ".unfinished"));
    // Process 1 is always there.
    const {hostname} = await import("node:os");
    const owner = (pid: number, machine: string) =>
      writeFileSync(join(out, ".unfinished", "owner.json"), JSON.stringify({pid, machine}));
    owner(1, hostname());
    await expect(host.openOutput(out)).rejects.toMatchObject({code: "host/run-in-progress"});
    owner(2 ** 30, `not-${hostname()}`);
    await expect(host.openOutput(out)).rejects.toMatchObject({code: "host/run-in-progress"});
    expect(contents(out)).toEqual([".unfinished"]);
    // Beyond the largest process number of Linux (2^22), so no such process lives.
    owner(2 ** 30, hostname());
    const folder = await host.openOutput(out);
    await folder.abandon();
    expect(contents(out)).toEqual([]);
  });
});

test("scratch space gives back what was appended and is gone afterwards", async () => {
  const scratch = await host.openScratch();
  await scratch.append(bytes("abc"));
  await scratch.append(bytes("defg"));
  expect(Buffer.from(await scratch.read(2, 3)).toString()).toBe("cde");
  expect((await scratch.read(7, 3)).length).toBe(0);
  await scratch.dispose();
});

describe("refusals of the operating system", () => {
  const refused = (code: string): Error => Object.assign(new Error(code), {code, syscall: "write"});
  test.each([
    ["ENOSPC", "host/disk-full"],
    ["EDQUOT", "host/disk-full"],
    ["EFBIG", "host/file-too-large"],
    ["EACCES", "host/no-permission"],
    ["EROFS", "host/no-permission"],
    ["EIO", "host/refused"],
  ])("%s is %s, the user's to mend", async (code, expected) => {
    const attempt = asking("out/x.csv", () => Promise.reject(refused(code)));
    await expect(attempt).rejects.toBeInstanceOf(InputError);
    await expect(asking("out/x.csv", () => Promise.reject(refused(code)))).rejects.toMatchObject({
      code: expected,
      exitStatus: 2,
      message: expect.stringContaining("out/x.csv"),
    });
  });

  test("anything else passes through as the defect it is", async () => {
    await expect(asking("x", () => Promise.reject(new TypeError("invented")))).rejects.toBeInstanceOf(TypeError);
  });
});
