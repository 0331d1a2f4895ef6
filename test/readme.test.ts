/**
 * README.md is true: its commands run, what it shows is what they print, its snippet compiles and runs.
 * DEVELOPERS.md names what exists.
 */
import {existsSync, readFileSync} from "node:fs";
import {join, resolve} from "node:path";
import ts from "typescript";
import {describe, expect, onTestFinished, test, vi} from "vitest";
import {SM_05} from "../data-demo/picture.ts";
import * as library from "../lib/index.ts";
import {seededRandom} from "../lib/numeric/random.ts";
import {harmonicMeasure} from "../lib/potential/poisson.ts";
import {GRAVITY_LAYER, MAGNETIC_LAYER} from "../lib/potential/source-law.ts";
import {CAUTIONS, cautionSentence} from "../lib/report/cautions.ts";
import {NOT_CORRECTED} from "../lib/survey/not-corrected.ts";
import {fileWith, gridBytes, run, temporaryFolder} from "./cli/harness.ts";
import {fileSource} from "./harness/file-source.ts";

const README = readFileSync("README.md", "utf8");

interface Block {
  readonly language: string;
  readonly text: string;
}

/** Fenced blocks in order. */
const blocksOf = (markdown: string): Block[] =>
  [...markdown.matchAll(/^```(\w*)\n([\s\S]*?)^```$/gm)].map(([, language, text]) => ({
    language: language!,
    text: text!,
  }));

const BLOCKS = blocksOf(README);

/** Each command of a shell block as its words, continued lines joined. No word of ours holds a quote. */
const commandsOf = ({text}: Block): string[][] =>
  text
    .replaceAll(/\\\n\s*/g, "")
    .split("\n")
    .filter((row) => row.startsWith("npx groundward "))
    .map((row) => row.split(/\s+/).slice(2));

const SHELL = BLOCKS.flatMap((block, i) =>
  block.language === "sh"
    ? commandsOf(block).map((words) => ({
        words,
        // What a command prints stands in the block after its own, when its own holds nothing else.
        shown: commandsOf(block).length === 1 && BLOCKS[i + 1]?.language === "text" ? BLOCKS[i + 1]!.text : undefined,
      }))
    : [],
);

/** A line of gravity from chainage 0 to 1300, 30 m above a strip of 0.6 mGal at 600:700; seeded noise of 0.02 mGal. */
function gravityLine(): string {
  const {normal} = seededRandom(23);
  const rows = Array.from({length: 131}, (_, i) => {
    const value = 0.6 * harmonicMeasure(10 * i, 30, 600, 700) + 0.02 * normal();
    return `L1,${10 * i},30,${value.toFixed(4)}`;
  });
  return `line,chainage,clearance,gravity\n${rows.join("\n")}\n`;
}

/** Files that README names as the reader's own. */
function withOwnFiles(words: readonly string[]): string[] {
  const folder = temporaryFolder();
  const own: Readonly<Record<string, () => string>> = {
    "lines.csv": () => fileWith("lines.csv", gravityLine()),
    "grid.tif": () => fileWith("grid.tif", gridBytes(40, 4)),
  };
  return words.map((word, i) => (words[i - 1] === "--out" ? join(folder, "out") : (own[word]?.() ?? word)));
}

describe("README", () => {
  test("opens with one paragraph and then the two commands", () => {
    expect(README).toMatch(/^# Groundward\n\n[^\n]+\n\n```\n/);
    expect(BLOCKS[0]).toEqual({
      language: "",
      text: [
        "npm ci && npm run demo        # installs, builds, runs the main job on data-demo, prints a summary, leaves files to open",
        "npm ci && npm test            # passes the tests",
        "",
      ].join("\n"),
    });
  });

  test("shows commands, and the output of three of them", () => {
    expect(SHELL).toHaveLength(7);
    expect(SHELL.filter(({shown}) => shown !== undefined)).toHaveLength(3);
  });

  test.each(SHELL.map((command) => ({...command, title: command.words.join(" ")})))(
    "$title",
    async ({words, shown}) => {
      const {status, out, err} = await run(withOwnFiles(words));
      expect({status, err: status === 0 ? "" : err}).toEqual({status: 0, err: ""});
      if (shown !== undefined) expect(out).toBe(shown);
    },
  );

  test("what it says of the example is in the example and in the truth", () => {
    const example = SHELL[0]!.shown!;
    expect(example).toMatch(/SM-05 +dyke +1\.336 +0\.6697 \.\. 2\.003/);
    expect(README).toContain("known to no better than 0.67 to 2.0 A/m");
    const rows = readFileSync("data-demo/skelder-moor-truth.csv", "utf8")
      .split("\n")
      .map((row) => row.split(","))
      .filter(([line]) => line === "SM-05");
    const mean = (body: string): number => {
      const sheets = rows.filter(([, name]) => name === body).map((row) => row.map(Number));
      return sheets.reduce((sum, sheet) => sum + sheet[4]!, 0) / sheets.length;
    };
    expect(README).toContain(`${mean("dyke").toPrecision(3)} A/m in the dyke and ${mean("rubble").toPrecision(3)} A/m`);
  });

  test("its factors are those of the program", () => {
    expect(README).toContain(`1 mGal is ${(1e-5 * GRAVITY_LAYER.densityPerField).toFixed(0)} kg/m²`);
    expect(README).toContain(`1 A/m makes ${(1e9 / MAGNETIC_LAYER.densityPerField).toFixed(1)} nT`);
  });

  test("its cautions and the list of corrections are the program's", () => {
    const plain = README.replaceAll("**", "");
    for (const caution of CAUTIONS) expect(plain).toContain(cautionSentence(caution));
    const section = README.slice(README.indexOf("## What Groundward does not do"), README.indexOf("## Cautions"));
    for (const {name} of NOT_CORRECTED) expect(section).toContain(name);
  });

  test("every option, file and folder it names exists", async () => {
    const help = (
      await Promise.all(
        ["inspect", "continue", "plan", "crossings", "gather", "worker", "spectrum"].map((name) =>
          run([name, "--help"]),
        ),
      )
    )
      .map(({out}) => out)
      .join("\n");
    const options = new Set(README.match(/--[a-z][a-z-]+/g));
    expect(options.size).toBeGreaterThan(15);
    for (const option of options) expect(`${help}\n--help`).toMatch(new RegExp(`${option}\\b`));
    for (const [, target] of README.matchAll(/\]\(([^)#:]+)\)/g))
      expect([target, existsSync(target!)]).toEqual([target, true]);
  });

  test("states the Node version that package.json asks for", () => {
    const {engines} = JSON.parse(readFileSync("package.json", "utf8"));
    expect(engines.node).toBe(">=20.19");
    expect(README).toContain("Node 20.19 or later");
  });
});

describe("DEVELOPERS.md", () => {
  const text = readFileSync("DEVELOPERS.md", "utf8");

  test("is no longer than 300 lines", () => {
    expect(text.split("\n").length).toBeLessThanOrEqual(301);
  });

  test("names files that exist and functions that are in them", () => {
    const paths = [...text.matchAll(/`((?:lib|cli|test|data-demo|\.ci)\/[\w./-]*)`/g)].map(([, path]) => path!);
    expect(paths.length).toBeGreaterThan(50);
    expect(paths.filter((path) => !existsSync(path))).toEqual([]);
    // `name` (`file`) or `name` in `file`.
    const pairs = [...text.matchAll(/`(\w+)`(?: \(| in | of )`((?:lib|cli|test)\/[\w./-]*\.ts)`/g)];
    expect(pairs.length).toBeGreaterThan(15);
    for (const [, name, path] of pairs)
      expect([path, name, new RegExp(`\\b${name}\\b`).test(readFileSync(path!, "utf8"))]).toEqual([path, name, true]);
  });

  test("draws the direction of imports that the test of the house keeps", () => {
    const drawn = /```\n(errors [\s\S]*?)```/.exec(text)![1]!;
    const kept = readFileSync("test/architecture.test.ts", "utf8");
    const order = [.../const ORDER[\s\S]*?\n\];/.exec(kept)![0].matchAll(/\[("[^\]]*")\]/g)].map(([, group]) =>
      group!.replaceAll(/"(?:lib\/)?|[",]/g, "").trim(),
    );
    expect(drawn.split("→").map((group) => group.trim())).toEqual(order);
  });
});

describe("the snippet of README", () => {
  const [snippet, ...others] = BLOCKS.filter(({language}) => language === "ts");
  const text = snippet!.text;

  test("is one, of six lines beside its import", () => {
    expect(others).toEqual([]);
    expect(text.split("\n").filter((row) => row !== "" && !row.startsWith("import"))).toHaveLength(6);
  });

  test("compiles under the project's own settings", () => {
    const given = [
      `import type {ByteSource, Settings} from "groundward";`,
      "declare const file: ByteSource; declare const settings: Settings;",
      "declare const console: {log(...words: unknown[]): void};",
    ].join("\n");
    expect(problemsIn(`${given}\n${text}`)).toEqual([]);
    // The check can fail: a name that studyLine does not return is found.
    expect(problemsIn(`${given}\n${text.replace("choice,", "bound,")}`).join()).toMatch(/'bound' does not exist/);
  });

  test("prints what the command prints", async () => {
    const log = vi.spyOn(console, "log").mockImplementation(() => undefined);
    onTestFinished(() => log.mockRestore());
    const body = text.replace(/^import \{(.*)\} from "groundward";$/m, "const {$1} = library;");
    expect(body).not.toBe(text);
    const script = ts.transpile(body, {target: ts.ScriptTarget.ES2022});
    const AsyncFunction = (async () => undefined).constructor as new (
      ...texts: string[]
    ) => (...values: unknown[]) => Promise<void>;
    await new AsyncFunction("library", "file", "settings", script)(
      library,
      fileSource("data-demo/skelder-moor-sm-05.csv"),
      SM_05,
    );
    const printed = log.mock.calls.map(([line, strip, ...numbers]) => [
      line,
      strip,
      ...numbers.map((si) => (Number(si) * MAGNETIC_LAYER.densityPerField).toPrecision(4)),
    ]);
    expect(printed.map((words) => words.slice(0, 2))).toEqual([
      ["SM-05", "dyke"],
      ["SM-05", "rubble"],
    ]);
    for (const words of printed) for (const word of words) expect(SHELL[0]!.shown).toContain(word);
  });
});

/** Files that the compiler has read, for the next time. */
const PARSED = new Map<string, ts.SourceFile>();

/** What the compiler finds in a module at the root of the project, where "groundward" is lib/index.ts. */
function problemsIn(text: string): string[] {
  const path = resolve("readme-snippet.ts");
  const {options} = ts.parseJsonConfigFileContent(
    ts.readConfigFile("tsconfig.json", ts.sys.readFile).config,
    ts.sys,
    resolve("."),
  );
  // The snippet names all that a study holds and uses part of it.
  const asked = {
    ...options,
    noUnusedLocals: false,
    paths: {groundward: [resolve("lib/index.ts")]},
    allowImportingTsExtensions: true,
  };
  const host = ts.createCompilerHost(asked);
  const {getSourceFile, fileExists} = host;
  host.getSourceFile = (name, target) => {
    if (resolve(name) === path) return ts.createSourceFile(name, text, target);
    const known = PARSED.get(name) ?? getSourceFile.call(host, name, target);
    if (known !== undefined) PARSED.set(name, known);
    return known;
  };
  host.fileExists = (name) => resolve(name) === path || fileExists.call(host, name);
  const program = ts.createProgram([path], asked, host);
  return ts
    .getPreEmitDiagnostics(program, program.getSourceFile(path))
    .map(({messageText}) => ts.flattenDiagnosticMessageText(messageText, " "));
}
