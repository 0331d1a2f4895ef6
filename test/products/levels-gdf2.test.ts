import {expect, test} from "vitest";
import {openGdf2} from "../../lib/formats/aseg-gdf2-read.ts";
import {lineProducts} from "../../lib/products/catalogue.ts";
import {levelsCsv} from "../../lib/products/levels-csv.ts";
import {levelsGdf2} from "../../lib/products/levels-gdf2.ts";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import {memorySource, memoryStore} from "../formats/memory.ts";
import {doneLine, failedLine, frameFixture, settingsFixture} from "../harness/study-fixture.ts";
import {keptText, parsedCsv} from "../harness/text-sink.ts";

async function written(outcomes: readonly LineOutcome[]) {
  const files = new Map<string, ReturnType<typeof memoryStore>>();
  const product = await levelsGdf2({
    openText: () => keptText(),
    openBytes: (name) => {
      files.set(name, memoryStore());
      return files.get(name)!;
    },
    openScratch: memoryStore,
  });
  await product.begin(frameFixture());
  for (const outcome of outcomes) await product.line(outcome);
  await product.end();
  return new Map([...files].map(([name, store]) => [name, store.bytes()]));
}

const OUTCOMES = [doneLine(), failedLine("broken"), doneLine({id: "Höf 2", coordinates: "none", reversed: true})];

test("the pair holds the rows of levels.csv, number for number, and fits its own widths", async () => {
  const files = await written(OUTCOMES);
  expect([...files.keys()]).toEqual(["levels.dfn", "levels.dat"]);
  const table = await openGdf2({
    definition: memorySource(files.get("levels.dfn")!, "levels.dfn"),
    data: memorySource(files.get("levels.dat")!, "levels.dat"),
  });
  expect(table.notices).toEqual([]);
  expect(table.units).toEqual([undefined, undefined, "m", undefined, undefined, "m", "nT", "nT", "nT", "m", undefined]);
  const sink = keptText();
  const csv = levelsCsv(sink);
  await csv.begin(frameFixture());
  for (const outcome of OUTCOMES) await csv.line(outcome);
  await csv.end();
  const wanted = parsedCsv(sink.text()).map((row) => Object.values(row));
  const got: (readonly string[])[] = [];
  for await (const block of table.blocks()) got.push(...block.rows);
  expect(got.length).toBe(wanted.length);
  expect(wanted.length).toBe(2 * 2 * 221);
  const plain = (cell: string) => (cell === "" || Number.isNaN(Number(cell)) ? cell : Number(cell));
  expect(got.map((row) => row.map(plain))).toEqual(wanted.map((row) => row.map(plain)));
});

test("no line done: a definition, and data of no row", async () => {
  const files = await written([failedLine("broken")]);
  expect(files.get("levels.dat")!.length).toBe(0);
  expect(Buffer.from(files.get("levels.dfn")!).toString()).toContain("FIELD:I");
});

test("it is written only when asked for", async () => {
  const names = async (also?: readonly string[]) => {
    const opened: string[] = [];
    const {wanted, ...rest} = settingsFixture();
    const settings = {...rest, wanted: also === undefined ? wanted : {...wanted, also}};
    const note = <T>(name: string, sink: T): T => {
      opened.push(name);
      return sink;
    };
    const opening = {
      openText: (name: string) => note(name, keptText()),
      openBytes: (name: string) => note(name, memoryStore()),
      openScratch: memoryStore,
    };
    await lineProducts(opening, {version: "0", settings});
    return opened;
  };
  const usual = await names();
  expect(usual.filter((name) => name.endsWith(".dfn") || name.endsWith(".dat"))).toEqual([]);
  expect((await names(["gdf2"])).filter((name) => !usual.includes(name))).toEqual(["levels.dfn", "levels.dat"]);
});
