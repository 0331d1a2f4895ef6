/** The queue on a Redis server. Its packages are loaded only where one is asked for, and need not be installed. */
import type {Job, Queue} from "bullmq";
import type {Redis} from "ioredis";
import {InputError} from "../../lib/errors.ts";
import {queueAddress} from "../queue/address.ts";
import {type LineQueue, type QueuedRun, TRIES} from "../queue/line-queue.ts";

/** Of every key. */
const PREFIX = "groundward";
const RUNS = `${PREFIX}:runs`;
const workerKey = (worker: string): string => `${PREFIX}:worker:${worker}`;
const refusalsKey = ({id}: QueuedRun): string => `${PREFIX}:refusals:${id}`;
const PRESENT_S = 15;
const CONNECT_MS = 5000;
/** A server that was there is waited for so long: it may be started anew, or its machine. */
const PATIENCE_S = 120;
const RETRY_MS = 1000;
/** A line at the server takes some hundreds of bytes; so many are told in one go. */
const BLOCK = 1000;
/** Kept of what happened; nobody reads it. */
const EVENTS = 100;
/** Oldest server that the packages support. */
const OLDEST: readonly [number, number] = [6, 2];
/** Between two tries. */
const BACKOFF_MS = 1000;
/** Reasons of lost lines that are fetched. */
const REASONS = 10;
/** Deletes a call for workers unless the run was submitted again since. */
const RETIRE =
  'if redis.call("HGET", KEYS[1], ARGV[1]) == ARGV[2] then return redis.call("HDEL", KEYS[1], ARGV[1]) end';

interface LineData {
  readonly index: number;
  readonly tries: number;
}

/** A run as the list of runs has it. */
interface Call extends QueuedRun {
  readonly since: number;
}

/** The two packages, loaded when a queue is asked for. */
interface Loaders {
  bullmq(): Promise<Pick<typeof import("bullmq"), "Queue" | "Worker">>;
  ioredis(): Promise<Pick<typeof import("ioredis"), "Redis">>;
}

const loaders: Loaders = {bullmq: () => import("bullmq"), ioredis: () => import("ioredis")};

export interface QueueTerms {
  /** Seconds of silence after which a line is taken from its worker. */
  readonly lostAfter: number;
  /** Told in a sentence when the server goes away and when it is back. */
  tell?(text: string): void;
  /** Seconds that a server that was there is waited for. */
  readonly patience?: number;
  readonly load?: Loaders;
}

/** @throws {InputError} `queue/…` */
export async function openQueue(
  text: string,
  {lostAfter, tell = () => undefined, patience = PATIENCE_S, load = loaders}: QueueTerms,
): Promise<LineQueue> {
  const {url, shown} = queueAddress(text);
  const [{Queue, Worker}, {Redis}] = await installed(() => Promise.all([load.bullmq(), load.ioredis()]));
  let begun = false;
  let closing = false;
  const tries = Math.ceil((1000 * patience) / RETRY_MS);
  const client = new Redis(url, {
    lazyConnect: true,
    connectTimeout: CONNECT_MS,
    // Requests wait until the connection is given up.
    maxRetriesPerRequest: null,
    // A wrong address is told at once; a server that was there may come back.
    retryStrategy: (times) => (begun && times <= tries ? RETRY_MS : null),
  });
  let reason = "no answer";
  let away = false;
  client.on("error", (error) => {
    reason = error.message || String((error as NodeJS.ErrnoException).code);
  });
  client.on("close", () => {
    if (!begun || closing || away) return;
    away = true;
    tell(`The queue at ${shown} is away: it is waited for, ${patience} s at most. Finished lines are kept.`);
  });
  client.on("ready", () => {
    if (away) tell(`The queue at ${shown} is back.`);
    away = false;
  });
  const asking = async <T>(request: () => Promise<T>): Promise<T> => {
    try {
      return await request();
    } catch (error) {
      // Of a server that answered by a refusal the answer counts, else why there is no connection.
      const answered = begun && client.status === "ready" && error instanceof Error;
      throw unreachable(shown, begun, answered ? error.message : reason, error);
    }
  };
  let drops: string | undefined;
  try {
    await asking(() => client.connect());
    drops = await checked(client, shown, asking);
  } catch (error) {
    client.disconnect();
    throw error;
  }
  begun = true;
  const queues = new Map<string, Queue<LineData>>();
  const calls = new Map<string, string>();
  const queueOf = ({id}: QueuedRun): Queue<LineData> => {
    const known = queues.get(id);
    if (known !== undefined) return known;
    const queue: Queue<LineData> = new Queue(id, {
      connection: client,
      prefix: PREFIX,
      skipVersionCheck: true,
      streams: {events: {maxLen: EVENTS}},
    });
    queue.on("error", () => undefined);
    queues.set(id, queue);
    return queue;
  };
  return {
    address: shown,
    drops,
    submit: (run, places) =>
      asking(async () => {
        const queue = queueOf(run);
        await client.del(refusalsKey(run));
        for (const job of await queue.getFailed(0, -1)) await job.remove();
        for (let at = 0; at < places.length; at += BLOCK)
          await queue.addBulk(
            places.slice(at, at + BLOCK).map((index) => ({
              name: "line",
              data: {index, tries: 0},
              opts: {
                jobId: `line-${index}`,
                attempts: TRIES,
                backoff: {type: "fixed", delay: BACKOFF_MS},
                removeOnComplete: true,
              },
            })),
          );
        // After the lines: a worker that finds none takes the call back.
        const call: Call = {...run, since: Date.now()};
        await client.hset(RUNS, run.id, JSON.stringify(call));
      }),
    runs: () =>
      asking(async () => {
        const entries = Object.entries(await client.hgetall(RUNS));
        for (const [id, value] of entries) calls.set(id, value);
        return entries.map(([, value]) => JSON.parse(value) as Call).sort((a, b) => a.since - b.since);
      }),
    state: (run) =>
      asking(async () => {
        const queue = queueOf(run);
        const counts = await queue.getJobCounts("waiting", "active", "delayed", "failed", "prioritized");
        const of = (name: string): number => counts[name] ?? 0;
        const failed = of("failed") === 0 ? [] : await queue.getFailed(0, REASONS - 1);
        return {
          waiting: of("waiting") + of("delayed") + of("prioritized"),
          active: of("active"),
          lost: failed.map(({data, failedReason}) => ({index: data.index, reason: failedReason})),
        };
      }),
    retire: (run) =>
      asking(async () => {
        await client.eval(RETIRE, 1, RUNS, run.id, calls.get(run.id) ?? "");
      }),
    withdraw: (run) =>
      asking(async () => {
        await client.hdel(RUNS, run.id);
        await client.del(refusalsKey(run));
        await queueOf(run).obliterate({force: true});
      }),
    refuse: (run, worker, why) => asking(async () => void (await client.hset(refusalsKey(run), worker, why))),
    refusals: (run) => asking(async () => new Map(Object.entries(await client.hgetall(refusalsKey(run))))),
    present: (worker) => asking(async () => void (await client.set(workerKey(worker), "", "EX", PRESENT_S))),
    workers: () =>
      asking(async () => {
        let found = 0;
        for await (const keys of client.scanStream({match: workerKey("*"), count: BLOCK})) found += keys.length;
        return found;
      }),
    serve(run, abreast, compute, trouble) {
      const process = async (job: Job<LineData>): Promise<void> => {
        const {index, tries} = job.data;
        await compute({index, tries, begin: () => job.updateData({index, tries: tries + 1})});
      };
      const connection = client.duplicate({
        lazyConnect: false,
        maxRetriesPerRequest: null,
        retryStrategy: () => RETRY_MS,
      });
      connection.on("error", () => undefined);
      const worker = new Worker<LineData>(run.id, process, {
        connection,
        prefix: PREFIX,
        skipVersionCheck: true,
        concurrency: abreast,
        lockDuration: 1000 * lostAfter,
        stalledInterval: 500 * lostAfter,
        // Whoever takes the line counts, so that a line is not blamed for the end of its neighbour's.
        maxStalledCount: Number.MAX_SAFE_INTEGER,
      });
      // That there is no connection is told once, by the client.
      worker.on("error", (error) => {
        if (client.status === "ready" && !("syscall" in error)) trouble(error.message);
      });
      return {
        async end(now = false) {
          await worker.close(now);
          connection.disconnect();
        },
      };
    },
    async close() {
      closing = true;
      for (const queue of queues.values()) await queue.close().catch(() => undefined);
      client.disconnect();
    },
  };
}

async function installed<T>(load: () => Promise<T>): Promise<T> {
  try {
    return await load();
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== "ERR_MODULE_NOT_FOUND") throw error;
    throw new InputError(
      "queue/not-installed",
      "A queue needs two packages that are not installed. Install them beside Groundward: npm install bullmq ioredis.",
      {cause: error},
    );
  }
}

function unreachable(address: string, begun: boolean, reason: string, cause: unknown): InputError {
  if (/^(WRONGPASS|NOAUTH|ERR AUTH)/.test(reason))
    return new InputError(
      "queue/refused-password",
      `The server at ${address} does not let this program in (${reason}). Give its password with the address, redis://:PASSWORD@host:port, or NAME:PASSWORD where it knows names.`,
      {cause},
    );
  return new InputError(
    "queue/unreachable",
    begun
      ? `The queue at ${address} was lost (${reason}). Finished lines are kept. Bring the server back and give the same command again.`
      : `The queue at ${address} cannot be reached (${reason}). ${/certificate/i.test(reason) ? "The connection is encrypted, but this machine does not trust the server's certificate: set NODE_EXTRA_CA_CERTS to a file with that of its authority." : "Check host and port, whether the server runs (redis-cli -u ADDRESS ping), whether it speaks TLS (then rediss:// and else redis://) and whether it needs a password (redis://:PASSWORD@host:port)."}`,
    {cause},
  );
}

/** @returns the rule by which the server drops keys, if it has one */
async function checked(
  client: Redis,
  address: string,
  asking: <T>(request: () => Promise<T>) => Promise<T>,
): Promise<string | undefined> {
  const told = await asking(async () => `${await client.info("server")}\n${await client.info("memory")}`);
  const version = /^redis_version:(\d+)\.(\d+)\S*/m.exec(told);
  const [major, minor] = [Number(version?.[1]), Number(version?.[2])];
  if (!(major > OLDEST[0] || (major === OLDEST[0] && minor >= OLDEST[1])))
    throw new InputError(
      "queue/too-old",
      `The server at ${address} is ${version === null ? "of an unknown version" : `Redis ${version[0].split(":")[1]}`}, and the queue needs Redis ${OLDEST.join(".")} or later. Install a later one.`,
    );
  const policy = /^maxmemory_policy:(\S+)/m.exec(told)?.[1];
  return policy === "noeviction" ? undefined : policy;
}
