/** The house rules that a reader of the code relies on, read off the sources themselves. */
import {readdirSync, readFileSync} from "node:fs";
import {join, relative} from "node:path";
import {fileURLToPath} from "node:url";
import ts from "typescript";
import {describe, expect, test} from "vitest";

const ROOT = fileURLToPath(new URL("..", import.meta.url));

/** Rooms from left to right; a file sees its own room and any to the left, never another of its group. */
const ORDER: readonly (readonly string[])[] = [
  ["lib/errors", "lib/notice", "lib/quantities"],
  ["lib/numeric", "lib/formats"],
  ["lib/geometry"],
  ["lib/potential"],
  // A channel of a survey names its observable; potential/ has never heard of a survey.
  ["lib/survey"],
  ["lib/operators", "lib/acquisition"],
  ["lib/spectral"],
  ["lib/solvers"],
  ["lib/inverse"],
  ["lib/continuation"],
  ["lib/study"],
  ["lib/report"],
  ["lib/products"],
  ["lib/index"],
  ["cli"],
];

/** Built-in modules that only compute. */
const COMPUTING = new Set(["node:zlib", "node:crypto", "node:util", "node:buffer", "node:v8"]);
/** The one file of `lib/` that loads a library itself, later than an import would. */
const LOADER = "lib/geometry/proj4-library.ts";
/** What reaches outside: clock, chance, terminal, process, network. */
const OUTSIDE_WORLD = new Set([
  "Date",
  "process",
  "console",
  "performance",
  "fetch",
  "setTimeout",
  "setInterval",
  "setImmediate",
  "navigator",
  "require",
]);

interface Source {
  /** Relative to the root, with slashes. */
  readonly path: string;
  readonly text: string;
}

/** `lib/geometry/interval.ts` → `lib/geometry`; `lib/errors.ts` → `lib/errors`; `cli/options/entry.ts` → `cli`. */
function roomOf(path: string): string {
  const parts = path.replace(/\.ts$/, "").split("/");
  return parts[0] === "cli" ? "cli" : parts.slice(0, 2).join("/");
}

const rankOf = (room: string): number => ORDER.findIndex((group) => group.includes(room));

function violations({path, text}: Source): string[] {
  const found: string[] = [];
  const tree = ts.createSourceFile(path, text, ts.ScriptTarget.Latest, true);
  const room = roomOf(path);
  const rank = rankOf(room);
  if (rank < 0) return [`${path}: no room called ${room} in the order`];
  const isHost = path === "cli/host.ts" || path.startsWith("cli/host/");

  const checkImport = (to: string): void => {
    if (to.startsWith("node:")) {
      const loads = to === "node:module" && path === LOADER;
      if (!isHost && !loads && !COMPUTING.has(to)) found.push(`${path}: imports ${to}`);
      return;
    }
    if (!to.startsWith(".")) {
      if (
        /^(fs|net|http|https|http2|dns|tls|dgram|os|child_process|worker_threads|cluster|process|readline)(\/|$)/.test(
          to,
        )
      )
        found.push(`${path}: imports ${to} without node:`);
      return;
    }
    if (!to.endsWith(".ts")) found.push(`${path}: imports ${to} without its extension`);
    const target = relative(ROOT, join(ROOT, path, "..", to)).replaceAll("\\", "/");
    const other = roomOf(target);
    const otherRank = rankOf(other);
    if (otherRank < 0) found.push(`${path}: imports ${target}, outside every room`);
    else if (otherRank > rank) found.push(`${path}: imports upward ${target}`);
    else if (otherRank === rank && other !== room && rank > 0) found.push(`${path}: imports sideways ${target}`);
  };

  const visit = (node: ts.Node): void => {
    if (
      (ts.isImportDeclaration(node) || ts.isExportDeclaration(node)) &&
      node.moduleSpecifier &&
      ts.isStringLiteral(node.moduleSpecifier)
    )
      checkImport(node.moduleSpecifier.text);
    else if (ts.isCallExpression(node) && node.expression.kind === ts.SyntaxKind.ImportKeyword) {
      const [argument] = node.arguments;
      if (argument && ts.isStringLiteral(argument)) checkImport(argument.text);
      else found.push(`${path}: imports what is not spelt out`);
    } else if (
      ts.isImportTypeNode(node) &&
      ts.isLiteralTypeNode(node.argument) &&
      ts.isStringLiteral(node.argument.literal)
    )
      checkImport(node.argument.literal.text);
    else if (ts.isIdentifier(node) && !isHost) {
      const {parent} = node;
      // A property `x.process` or a key `process:` is a name of our own.
      const own =
        (ts.isPropertyAccessExpression(parent) && parent.name === node) ||
        (ts.isPropertyAssignment(parent) && parent.name === node) ||
        (ts.isPropertySignature(parent) && parent.name === node) ||
        ts.isJsxAttribute(parent);
      // Date.UTC, Date.parse and new Date(day) turn a calendar day into a number and ask no clock.
      const calendar =
        node.text === "Date" &&
        ((ts.isPropertyAccessExpression(parent) && /^(UTC|parse)$/.test(parent.name.text)) ||
          (ts.isNewExpression(parent) && (parent.arguments?.length ?? 0) > 0));
      if (!own && !calendar && OUTSIDE_WORLD.has(node.text)) found.push(`${path}: uses ${node.text}`);
      if (!own && node.text === "Math" && ts.isPropertyAccessExpression(parent) && parent.name.text === "random")
        found.push(`${path}: uses Math.random`);
      if (node.text === "globalThis") found.push(`${path}: uses globalThis`);
    }
    ts.forEachChild(node, visit);
  };
  visit(tree);
  return found;
}

function sourcesUnder(folder: string): Source[] {
  return readdirSync(join(ROOT, folder), {recursive: true, encoding: "utf8"})
    .filter((name) => name.endsWith(".ts"))
    .map((name) => `${folder}/${name.replaceAll("\\", "/")}`)
    .sort()
    .map((path) => ({path, text: readFileSync(join(ROOT, path), "utf8")}));
}

describe("the house", () => {
  test("imports go to the left, nothing but the host touches the outside world", () => {
    const sources = [...sourcesUnder("lib"), ...sourcesUnder("cli")];
    expect(sources.length).toBeGreaterThan(40);
    expect(sources.flatMap(violations)).toEqual([]);
  });

  test("the top floor holds the rooms and nothing else", () => {
    const folders = readdirSync(ROOT, {withFileTypes: true}).filter((entry) => entry.isDirectory());
    const strange = folders.filter(
      ({name}) => !/^(\.|out|(cli|lib|data-demo|test|dist|node_modules|coverage)$)/.test(name),
    );
    expect(strange.map(({name}) => name)).toEqual([]);
  });

  test("there is one host, and it is the one that reads and prints", () => {
    const host = sourcesUnder("cli").find(({path}) => path === "cli/host.ts");
    expect(host?.text).toMatch(/from "node:fs"/);
  });
});

describe("the checker itself finds", () => {
  const cases: readonly [string, string, string, RegExp][] = [
    ["an upward import", "lib/geometry/a.ts", `import {x} from "../inverse/nouns.ts";`, /upward lib\/inverse/],
    ["a type-only upward import", "lib/solvers/a.ts", `import type {X} from "../inverse/nouns.ts";`, /upward/],
    ["an upward re-export", "lib/numeric/a.ts", `export {x} from "../survey/line.ts";`, /upward/],
    ["an upward import() expression", "lib/study/a.ts", `const x = await import("../products/record.ts");`, /upward/],
    ["an upward import() type", "lib/study/a.ts", `type X = import("../products/record.ts").Record;`, /upward/],
    ["lib importing cli", "lib/index.ts", `import {x} from "../cli/host.ts";`, /upward cli/],
    ["a sideways import", "lib/acquisition/a.ts", `import {x} from "../operators/panels.ts";`, /sideways/],
    ["a kernel that knows a survey", "lib/potential/a.ts", `import {x} from "../survey/line.ts";`, /upward/],
    [
      "a sideways import of formats by numeric",
      "lib/numeric/a.ts",
      `import {x} from "../formats/csv-text.ts";`,
      /sideways/,
    ],
    [
      "an import out of the house",
      "lib/survey/a.ts",
      `import {x} from "../../test/harness/a.ts";`,
      /outside every room/,
    ],
    ["a room that is in no plan", "lib/helpers/a.ts", "export {};", /no room/],
    ["a missing extension", "lib/survey/a.ts", `import {x} from "./line";`, /extension/],
    ["files in lib", "lib/formats/a.ts", `import {readFileSync} from "node:fs";`, /imports node:fs/],
    ["files without prefix", "lib/formats/a.ts", `import {readFile} from "fs/promises";`, /imports fs\/promises/],
    ["a loader in lib", "lib/formats/a.ts", `import {createRequire} from "node:module";`, /imports node:module/],
    ["the network in lib", "lib/formats/a.ts", `const h = await import("node:http");`, /imports node:http/],
    ["threads in lib", "lib/study/a.ts", `import {Worker} from "node:worker_threads";`, /worker_threads/],
    ["a clock in lib", "lib/study/a.ts", "const t = Date.now();", /uses Date/],
    ["chance in lib", "lib/numeric/a.ts", "const u = Math.random();", /uses Math.random/],
    ["printing in lib", "lib/study/a.ts", `console.log("x");`, /uses console/],
    ["the process in lib", "lib/study/a.ts", "process.exit(1);", /uses process/],
    ["a way round by globalThis", "lib/study/a.ts", "globalThis.process.exit(1);", /globalThis/],
    ["files in a command", "cli/commands/a.ts", `import {writeFile} from "node:fs/promises";`, /imports node:fs/],
    ["printing in a command", "cli/commands/a.ts", `process.stdout.write("x");`, /uses process/],
    ["a clock in a command", "cli/commands/a.ts", "const now = new Date();", /uses Date/],
  ];
  test.each(cases)("%s", (_, path, text, complaint) => {
    expect(violations({path, text}).join("\n")).toMatch(complaint);
  });

  test("no fault where there is none", () => {
    const text = [
      `import {gunzipSync} from "node:zlib";`,
      `import Matrix from "ml-matrix";`,
      `import type {Place} from "../errors.ts";`,
      `import {interval} from "../geometry/interval.ts";`,
      `import {own} from "./own.ts";`,
      "const t = Date.UTC(2020, 1, 1); const d = new Date(t);",
      "const settings = {process: 1}; export const y = settings.process + Math.sqrt(2);",
    ].join("\n");
    expect(violations({path: "lib/study/a.ts", text})).toEqual([]);
    expect(violations({path: "lib/notice.ts", text: `import type {Place} from "./errors.ts";`})).toEqual([]);
    expect(
      violations({path: "cli/host.ts", text: `import {open} from "node:fs/promises"; process.exitCode = Date.now();`}),
    ).toEqual([]);
  });
});
