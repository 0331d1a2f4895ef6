import {expect, test} from "vitest";
import {doubtCollector, doubtText} from "../../cli/doubts.ts";
import {nodeHost} from "../../cli/host.ts";
import {progressOf} from "../../cli/progress.ts";
import {doubt, remark} from "../../lib/notice.ts";

test("doubts of many lines are told once a kind, doubts before remarks", () => {
  const doubts = doubtCollector();
  doubts.add([doubt("survey/crooked", "The axis is doubtful.")]);
  for (let i = 1; i <= 27; ++i)
    doubts.add(
      [
        remark("bound/not-active", "wide"),
        doubt("noise/from-record", `noise of ${i}`),
        doubt("noise/from-record", "again"),
      ],
      `L${i}`,
    );
  doubts.add([doubt("line/bent", "The line bends.")], "L3");
  const summary = doubts.summary();
  expect(summary.map(({code, count}) => [code, count])).toEqual([
    ["survey/crooked", 0],
    ["noise/from-record", 27],
    ["line/bent", 1],
    ["bound/not-active", 27],
  ]);
  expect(summary.map((kind) => doubtText(kind))).toEqual([
    "The axis is doubtful. [survey/crooked]",
    "27 lines (L1, L2, L3, L4 and 23 more) · as on L1: noise of 1 [noise/from-record]",
    "line L3 · The line bends. [line/bent]",
    "27 lines (L1, L2, L3, L4 and 23 more) · as on L1: wide [bound/not-active]",
  ]);
  expect(doubtText(summary[3]!, "row")).toMatch(/^27 rows \(/);
  // Of all lines no name need be told but that of the example.
  expect(doubtText(summary[3]!, "line", 27)).toBe("all 27 lines · as on L1: wide [bound/not-active]");
  expect(doubtText(summary[3]!, "line", 28)).toMatch(/^27 lines \(/);
});

/** @param takes milliseconds that step number `step` takes, from one */
function progressText(
  total: number,
  isTerminal: boolean,
  silent = false,
  takes: (step: number) => number = () => 40,
): string {
  let text = "";
  let time = 0;
  let step = 0;
  const err = {
    isTerminal,
    columns: 80,
    write: (more: string) => {
      text += more;
    },
  };
  const host = nodeHost({
    err,
    now: () => {
      time += step === 0 ? 0 : takes(step);
      step++;
      return time;
    },
  });
  const progress = progressOf(host, total, "lines", silent);
  for (let i = 1; i <= total; ++i) progress.step(`L${i}`);
  progress.end();
  return text;
}

test("progress in a pipe is a few lines, however many there are", () => {
  expect(progressText(2, false)).toBe("1 of 2 lines: L1\n2 of 2 lines: L2\n");
  // 40 ms a line: 25 a second, every quarter of the work.
  const told = progressText(1000, false).split("\n");
  expect(told).toHaveLength(5);
  expect(told[0]).toBe("250 of 1000 lines, 25 a second, 30 s left");
  expect(told[1]).toBe("500 of 1000 lines, 25 a second, 20 s left");
  expect(told.slice(-2)).toEqual(["1000 of 1000 lines", ""]);
  expect(progressText(20_000, false).split("\n").length - 1).toBe(Math.floor((20_000 * 0.04) / 10));
  expect(progressText(1000, false, true)).toBe("");
});

test("the first line, which holds what is done once, is left out of the rate", () => {
  const told = progressText(60, false, false, (step) => (step === 1 ? 60_000 : 1000)).split("\n");
  // A quarter of a minute goes by before anything is said of the rest.
  expect(told.slice(0, 6)).toEqual([
    "1 of 60 lines",
    "11 of 60 lines",
    "15 of 60 lines",
    "25 of 60 lines, 1.0 a second, 35 s left",
    "30 of 60 lines, 1.0 a second, 30 s left",
    "40 of 60 lines, 1.0 a second, 20 s left",
  ]);
  expect(told[6]).toBe("45 of 60 lines, 1.0 a second, 15 s left");
});

test("no rate is told before some lines are done, however long they take", () => {
  const told = progressText(10, false, false, () => 600_000).split("\n");
  expect(told.slice(0, 5)).toEqual([
    "1 of 10 lines",
    "2 of 10 lines",
    "3 of 10 lines",
    "4 of 10 lines, 6.0 an hour, 60 min left",
    "5 of 10 lines, 6.0 an hour, 50 min left",
  ]);
});

test("the rate is that of the latest lines", () => {
  const told = progressText(2000, false, false, (step) => (step <= 1000 ? 100 : 400)).split("\n");
  expect(told.find((line) => line.startsWith("1000 of"))).toBe("1000 of 2000 lines, 10 a second, 2 min left");
  expect(told.find((line) => line.startsWith("1300 of"))).toBe("1300 of 2000 lines, 2.5 a second, 5 min left");
});

test("progress on a terminal is one line that is cleared at the end", () => {
  const text = progressText(20, true);
  expect(text).not.toContain("\n");
  expect(text.startsWith("\r\u001b[2K1 of 20 lines · L1")).toBe(true);
  expect(text.endsWith("\r\u001b[2K")).toBe(true);
  expect(text.split("\r").length - 1).toBeLessThan(20);
});
