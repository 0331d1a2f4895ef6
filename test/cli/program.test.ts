import {describe, expect, test} from "vitest";
import {run} from "./harness.ts";

const flat = (text: string): string => text.replaceAll(/\s+/g, " ");

describe("the program", () => {
  test("--version prints the version alone", async () => {
    const {status, out, err} = await run(["--version"]);
    expect({status, err}).toEqual({status: 0, err: ""});
    expect(out).toMatch(/^\d+\.\d+\.\d+\n$/);
  });

  test("--help names every command", async () => {
    const {status, out} = await run(["--help"]);
    expect(status).toBe(0);
    for (const name of ["inspect", "continue", "plan", "spectrum", "schema"])
      expect(out).toMatch(new RegExp(`^ {2}${name} `, "m"));
  });

  test("no arguments: the help, on standard error, with exit status 2", async () => {
    const {status, out, err} = await run([]);
    expect({status, out}).toEqual({status: 2, out: ""});
    expect(err).toMatch(/Usage: groundward/);
  });

  test("help of continue lists every option of this stage with the trade's words", async () => {
    const {status, out} = await run(["continue", "--help"]);
    expect(status).toBe(0);
    for (const name of [
      ..."column clearance elevation sensor-offset elevation-datum ground-datum geoid-offset crs out-crs split".split(
        " ",
      ),
      ..."observable unit noise regional processing boundary support bound panel level strip confidence".split(" "),
      ..."profiles out replace json quiet job explain help".split(" "),
    ])
      expect(out).toContain(`--${name}`);
    expect(flat(out)).toMatch(/source zone, where sources may be/);
    expect(flat(out)).toMatch(/regularisation parameter/);
    expect(flat(out)).toMatch(/rms:V.*norm:V.*discrepancy/);
    expect(flat(out)).toMatch(/field-vertical/);
    expect(flat(out)).toMatch(/not clearance to dig, drill or enter/);
    for (const line of out.split("\n")) expect(line.length).toBeLessThanOrEqual(100);
  });

  test.each(["inspect", "continue", "plan", "spectrum", "schema"])(
    "help %s and %s --help say the same",
    async (name) => {
      expect(await run(["help", name])).toEqual(await run([name, "--help"]));
    },
  );

  test("an unknown option names the nearest known one", async () => {
    const {status, out, err} = await run(["continue", "a.csv", "--nois", "3"]);
    expect({status, out}).toEqual({status: 2, out: ""});
    expect(flat(err)).toMatch(/--nois is no option here\. Nearest is --noise;/);
  });

  test("an unknown option far from any still names one", async () => {
    expect((await run(["spectrum", "--xyzzyplugh"])).err).toMatch(/Nearest is --\w+/);
  });

  test("an unknown command names the nearest known one", async () => {
    const {status, err} = await run(["contniue", "a.csv"]);
    expect(status).toBe(2);
    expect(err).toMatch(/"contniue" is no command\. Nearest is continue;/);
  });

  test.each(["inspect", "continue"])("no survey named: %s", async (name) => {
    const {status, err} = await run([name]);
    expect(status).toBe(2);
    expect(flat(err)).toMatch(
      new RegExp(`No survey is named.*groundward ${name} lines\\.csv.*groundward ${name} --help`),
    );
  });

  test("with --json an error is one JSON object a line", async () => {
    const {status, out, err} = await run(["spectrum", "--support", "2:1", "--height", "1", "--json"]);
    expect({status, out}).toEqual({status: 2, out: ""});
    expect(err.trimEnd().split("\n")).toHaveLength(1);
    expect(JSON.parse(err)).toMatchObject({code: "option/end-before-start"});
    expect(JSON.parse(err).message).toMatch(/2:1/);
    expect(JSON.parse((await run(["spectrum", "--nonsense", "--json"])).err)).toMatchObject({code: "option/unknown"});
  });

  test("a control character in an argument never reaches the terminal", async () => {
    const {err} = await run(["spectrum", "--support", "\u001b[31m1:2", "--height", "1"]);
    expect(err).not.toContain("\u001b");
    expect(err).toContain("\ufffd[31m1:2");
  });

  test("what is thrown and not foreseen is called a defect, with its stack, and exit status 1", async () => {
    const openInput = () => Promise.reject(new TypeError("invented"));
    const args = ["continue", "a.csv", "--observable", "gravity", "--out", "unused"];
    const {status, out, err} = await run(args, {openInput});
    expect({status, out}).toEqual({status: 1, out: ""});
    expect(err).toMatch(/defect of Groundward.*TypeError: invented\n\s+at /s);
    expect(JSON.parse((await run([...args, "--json"], {openInput})).err)).toMatchObject({code: "program/defect"});
  });
});
