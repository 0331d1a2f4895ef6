/** Submitting, following and serving on a queue in memory, in one process. A real server: `test/outside/queue.test.ts`. */
import {readdirSync, readFileSync, writeFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {type Bench, benchFor} from "../../../cli/batch/bench.ts";
import {reopened} from "../../../cli/batch/opened-run.ts";
import {openParts} from "../../../cli/batch/parts.ts";
import type {ThreadData} from "../../../cli/batch/pool.ts";
import {nodeHost} from "../../../cli/host.ts";
import type {Host} from "../../../cli/nouns.ts";
import {type LineQueue, type QueuedRun, TRIES} from "../../../cli/queue/line-queue.ts";
import {contents, fileWith, gridBytes, type Outcome, run, surveyText, temporaryFolder} from "../harness.ts";

const NAMES = ["A", "B", "C", "D", "E"];
const SETTINGS = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5", "--strip", "dyke=200:260"];
const QUEUE = "redis://queue.example:6379";
const PARTS = ".groundward-run";
/** Line D flies below the boundary and fails. */
const text = surveyText(NAMES, 30).replaceAll(/^D,(\d+),30,/gm, "D,$1,-30,");

/** What a server holds, without one. Lines are tried again at once. */
function memoryQueue() {
  const calls = new Map<string, QueuedRun>();
  const waiting = new Map<number, number>();
  const active = new Set<number>();
  const lost = new Map<number, string>();
  const refusals = new Map<string, string>();
  const taken: number[] = [];
  const queue: LineQueue = {
    address: QUEUE,
    drops: undefined,
    async submit(submitted, places) {
      refusals.clear();
      lost.clear();
      for (const place of places) if (!active.has(place) && !waiting.has(place)) waiting.set(place, 0);
      calls.set(submitted.id, submitted);
    },
    runs: async () => [...calls.values()],
    state: async () => ({
      waiting: waiting.size,
      active: active.size,
      lost: [...lost].map(([index, reason]) => ({index, reason})),
    }),
    retire: async ({id}) => void calls.delete(id),
    withdraw: async ({id}) => void calls.delete(id),
    refuse: async (_, worker, reason) => void refusals.set(worker, reason),
    refusals: async () => refusals,
    present: async () => undefined,
    workers: async () => 0,
    serve(_, __, compute) {
      let ended = false;
      const loop = (async () => {
        while (!ended) {
          const [next] = waiting;
          if (next === undefined) {
            await new Promise((done) => setTimeout(done, 5));
            continue;
          }
          const [index, tries] = next;
          let begun = tries;
          waiting.delete(index);
          active.add(index);
          taken.push(index);
          try {
            await compute({index, tries, begin: async () => void ++begun});
          } catch (error) {
            if (begun < TRIES) waiting.set(index, begun);
            else lost.set(index, (error as Error).message);
          }
          active.delete(index);
        }
      })();
      return {
        end: async () => {
          ended = true;
          await loop;
        },
      };
    },
    close: async () => undefined,
  };
  return {queue, waiting, taken};
}

/** Threads that are none: `compute` may be put in place of the bench's. */
function inline(compute?: (bench: Bench, index: number) => Promise<unknown>): Partial<Host> {
  return {
    pause: (milliseconds) => new Promise((done) => setTimeout(done, milliseconds / 20)),
    startThreads: async (_, data) => {
      const {request, out, run: digest} = data as ThreadData;
      const host = nodeHost();
      let close = (): void => undefined;
      const bench = new Promise<Bench>((opened) => {
        void reopened(host, request, digest, (open) => {
          opened(benchFor(open, openParts(host, out)));
          return new Promise<void>((done) => {
            close = done;
          });
        });
      });
      return {
        run: async (task) =>
          compute === undefined
            ? {note: await (await bench).compute(task as number)}
            : compute(await bench, task as number),
        end: async () => close(),
      };
    },
  };
}

const bytes = (folder: string): Record<string, string> =>
  Object.fromEntries(
    readdirSync(folder)
      .filter((name) => name !== "timing.json")
      .map((name) => [name, readFileSync(join(folder, name), "latin1")]),
  );

function begun(queue: LineQueue, replaced: Partial<Host> = {}) {
  const survey = fileWith("lines.csv", text);
  const out = join(temporaryFolder(), "out");
  const host = {...inline(), openQueue: async () => queue, ...replaced};
  return {
    survey,
    out,
    submit: (...more: string[]) =>
      run(["continue", survey, ...SETTINGS, "--queue", QUEUE, "--out", out, ...more], host),
    worker: (...more: string[]) => run(["worker", "--queue", QUEUE, "--idle", "0.05", ...more], host),
    alone: async () => {
      const other = join(temporaryFolder(), "out");
      expect((await run(["continue", survey, ...SETTINGS, "--out", other])).status).toBe(5);
      return bytes(other);
    },
  };
}

const flat = ({err}: Outcome): string => err.replaceAll(/\s+/g, " ");

describe("a run on a queue", () => {
  test("submitted, left, worked on and joined: the bytes of one process, each line computed once", async () => {
    const {queue, waiting, taken} = memoryQueue();
    const {out, submit, worker, alone} = begun(queue);
    for (const _ of [1, 2]) {
      const detached = await submit("--detach");
      expect(detached.status).toBe(0);
      expect(detached.out).toContain(`5 of 5 lines are in the queue at ${QUEUE}, 0 finished before`);
    }
    expect(waiting.size).toBe(NAMES.length);
    expect(contents(out)).toEqual([PARTS]);
    // An address may hold a password, and many can read the folder.
    expect(readFileSync(join(out, PARTS, "request.json"), "utf8")).not.toContain("redis");
    const worked = await worker();
    expect(worked.status).toBe(0);
    expect(worked.out.trim().split("\n").sort()).toEqual(
      NAMES.map((name) => expect.stringMatching(new RegExp(`^${name}: ${name === "D" ? "failed" : "do"}`))),
    );
    // A line that failed is a result and is not tried again.
    expect([...taken].sort()).toEqual([0, 1, 2, 3, 4]);
    const joined = await submit();
    expect(joined.status).toBe(5);
    expect(joined.err).toContain("5 of 5 lines were finished before and are taken over.");
    expect(bytes(out)).toEqual(await alone());
    expect(await queue.runs()).toEqual([]);
  });

  test("is followed until its lines are done", async () => {
    const {queue} = memoryQueue();
    const {out, submit, worker, alone} = begun(queue);
    const [followed] = await Promise.all([
      submit(),
      (async () => {
        while (!contents(out).includes(PARTS)) await new Promise((done) => setTimeout(done, 5));
        await worker();
      })(),
    ]);
    expect(followed.status).toBe(5);
    expect(followed.err).toContain("5 of 5 lines");
    expect(bytes(out)).toEqual(await alone());
  });

  test("a line that always throws is given up; what is wrong with every line is not laid to one", async () => {
    const {queue, taken} = memoryQueue();
    const {out, submit, worker} = begun(
      queue,
      inline(async (bench, index) => {
        if (index === 1) throw new Error("worker exited with code: 3");
        return {note: await bench.compute(index)};
      }),
    );
    await submit("--detach");
    await worker();
    expect(taken.filter((index) => index === 1)).toHaveLength(TRIES);
    expect((await submit()).status).toBe(5);
    expect(readFileSync(join(out, "lines.csv"), "utf8")).toMatch(
      /^B,failed,.*given up after 3 tries: worker exited with code: 3/m,
    );

    const full = {kind: "InputError", code: "host/disk-full", message: "The disk is full."};
    const second = memoryQueue();
    const other = begun(
      second.queue,
      inline(async () => ({failure: full})),
    );
    await other.submit("--detach");
    await other.worker();
    // As the server does, the queue forgets what is submitted again; what it lost is told to whoever follows.
    second.queue.submit = async () => undefined;
    const told = await other.submit();
    expect(told.status).toBe(2);
    expect(flat(told)).toMatch(/5 lines were given up without a result: The disk is full\. .*\[queue\/lines-lost\]/);
  });

  test("lines that vanish are put in again, and not for ever", async () => {
    const {queue, waiting} = memoryQueue();
    let submissions = 0;
    const forgetful: LineQueue = {
      ...queue,
      submit: async (...args) => {
        ++submissions;
        await queue.submit(...args);
        waiting.clear();
      },
    };
    const told = await begun(forgetful).submit();
    expect(told.status).toBe(2);
    expect(submissions).toBe(4);
    expect(flat(told)).toMatch(/5 lines are gone from the queue and are put into it again.*\[queue\/lines-lost\]/);
  });
});

describe("a worker refuses, and the submitter is told", () => {
  /** What both say where the worker's machine is `changed`; the submitter is then interrupted. */
  async function refused(change: (survey: string) => Partial<Host>): Promise<{worker: string; submitter: string}> {
    const {queue} = memoryQueue();
    const stops: (() => void)[] = [];
    const {survey, out, submit} = begun(queue, {
      interruptible: ({stop}) => {
        if (stop !== undefined) stops.push(stop);
        return () => undefined;
      },
    });
    const following = submit();
    while ((await queue.runs()).length === 0) await new Promise((done) => setTimeout(done, 5));
    const host = {...inline(), openQueue: async () => queue, ...change(survey)};
    const worker = await run(["worker", "--queue", QUEUE, "--idle", "0.3"], host);
    expect(worker).toMatchObject({status: 0, out: ""});
    for (const stop of stops) stop();
    const submitter = await following;
    expect(submitter.status).toBe(130);
    expect(contents(out)).toEqual([PARTS]);
    expect(flat(submitter)).toContain("0 of 5 lines are finished and the queue goes on with the others.");
    return {worker: flat(worker), submitter: flat(submitter)};
  }

  test("another program", async () => {
    const {worker, submitter} = await refused(() => ({version: "99.0.0"}));
    for (const told of [worker, submitter])
      expect(told).toMatch(/This worker is .*99\.0\.0.*Equal bytes need equal programs/);
    expect(submitter).toContain("[queue/refused]");
  });

  test("inputs that changed", async () => {
    const {submitter} = await refused((survey) => {
      writeFileSync(survey, text.replace("A,0,30,", "A,0,31,"));
      return {};
    });
    expect(submitter).toContain('The run is not the same here: "lines.csv" has changed since.');
  });
});

test("what cannot be shared out so, or not at all, is refused", async () => {
  const {queue} = memoryQueue();
  const {submit} = begun(queue);
  expect((await submit("--shard", "1/2")).err).toContain("[option/two-shares]");
  const plain = ["continue", fileWith("lines.csv", text), ...SETTINGS, "--out", temporaryFolder()];
  expect((await run([...plain, "--detach"])).err).toContain("[option/no-queue]");
  expect((await run([...plain, "--queue", "queue.example"])).err).toContain("[queue/not-an-address]");
  expect((await run(["worker"])).err).toContain("[option/missing]");
  const grid = [
    "continue",
    fileWith("grid.tif", gridBytes()),
    "--observable",
    "field-vertical",
    "--clearance",
    "60",
    "--noise",
    "1",
  ];
  const refusedGrid = await run([...grid, "--queue", QUEUE, "--out", temporaryFolder()], {
    openQueue: async () => queue,
  });
  expect(refusedGrid.err).toContain("[option/lines-only]");
});
