/**
 * Runs over a real Redis server (redis-server) with the compiled program as submitter and as workers: equal bytes,
 * workers that are killed, a line that kills its worker, runs submitted twice. `npm run build` comes before.
 */
import {type ChildProcess, execFileSync, spawn} from "node:child_process";
import {createHash} from "node:crypto";
import {once} from "node:events";
import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  writeFileSync,
} from "node:fs";
import {createServer} from "node:net";
import {tmpdir} from "node:os";
import {join} from "node:path";
import {fileURLToPath, pathToFileURL} from "node:url";
import {afterAll, beforeAll, describe, expect, onTestFinished, test} from "vitest";
import {openQueue} from "../../cli/host/queue.ts";
import {surveyText} from "../cli/harness.ts";

const MAIN = fileURLToPath(new URL("../../dist/cli/main.js", import.meta.url));
const SETTINGS = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5", "--strip", "dyke=200:260"];
const LINES = 24;
const PARTS = ".groundward-run";

let folder = "";
let server: ChildProcess;
let address = "";
let undisturbed: Record<string, string>;

/** Line L7 flies below the boundary and fails. */
const text = surveyText(
  Array.from({length: LINES}, (_, i) => `L${i}`),
  40,
).replaceAll(/^L7,(\d+),30,/gm, "L7,$1,-30,");

/** Every file but the timing, by digest. */
const digests = (path: string): Record<string, string> =>
  Object.fromEntries(
    readdirSync(path)
      .filter((name) => name !== "timing.json")
      .sort()
      .map((name) => [
        name,
        createHash("sha256")
          .update(readFileSync(join(path, name)))
          .digest("hex"),
      ]),
  );

interface Started {
  readonly process: ChildProcess;
  readonly said: {out: string; err: string};
  /** Exit status; null after a signal. */
  readonly end: Promise<number | null>;
}

/** The program; it does not outlive the test. */
function start(args: readonly string[], environment: Record<string, string> = {}): Started {
  const child = spawn(process.execPath, [MAIN, ...args], {
    stdio: ["ignore", "pipe", "pipe"],
    env: {...process.env, ...environment},
  });
  const said = {out: "", err: ""};
  child.stdout!.on("data", (data) => {
    said.out += data;
  });
  child.stderr!.on("data", (data) => {
    said.err += data;
  });
  const end = once(child, "close").then(([status]) => status as number | null);
  onTestFinished(() => void child.kill("SIGKILL"));
  return {process: child, said, end};
}

const submit = (queue: string, out: string, ...more: string[]): Started =>
  start(["continue", join(folder, "lines.csv"), ...SETTINGS, "--queue", queue, "--out", out, ...more]);

/** A worker that counts as lost after a second. */
const worker = (queue: string, more: readonly string[] = [], environment: Record<string, string> = {}): Started =>
  start(["worker", "--queue", queue, "--workers", "2", "--lost-after", "1", ...more], environment);

async function until(holds: () => boolean): Promise<void> {
  while (!holds()) await new Promise((done) => setTimeout(done, 20));
}

async function freePort(): Promise<number> {
  const probe = createServer().listen(0, "127.0.0.1");
  await once(probe, "listening");
  const {port} = probe.address() as {port: number};
  probe.close();
  await once(probe, "close");
  return port;
}

/** A server that holds nothing when it ends, once it takes connections; it does not outlive the test. */
async function startServer(options: Readonly<Record<string, string | number>>): Promise<ChildProcess> {
  const all = {
    bind: "127.0.0.1",
    save: "",
    appendonly: "no",
    dir: folder,
    "maxmemory-policy": "noeviction",
    ...options,
  };
  const started = spawn(
    "redis-server",
    Object.entries(all).flatMap(([name, value]) => [`--${name}`, `${value}`]),
    {stdio: ["ignore", "pipe", "inherit"]},
  );
  onTestFinished(() => void started.kill("SIGKILL"));
  let log = "";
  started.stdout!.on("data", (data) => {
    log += data;
  });
  await until(() => log.includes("Ready to accept connections"));
  return started;
}

const flat = (text: string): string => text.replaceAll(/\s+/g, " ");

beforeAll(async () => {
  if (!existsSync(MAIN)) throw new Error("dist/ is missing: run npm run build first");
  folder = mkdtempSync(join(tmpdir(), "groundward-queue-"));
  const port = await freePort();
  address = `redis://127.0.0.1:${port}`;
  const options = {port, bind: "127.0.0.1", save: "", appendonly: "no", dir: folder, "maxmemory-policy": "noeviction"};
  server = spawn(
    "redis-server",
    Object.entries(options).flatMap(([name, value]) => [`--${name}`, `${value}`]),
    {stdio: ["ignore", "pipe", "inherit"]},
  );
  let log = "";
  server.stdout!.on("data", (data) => {
    log += data;
  });
  writeFileSync(join(folder, "lines.csv"), text);
  const whole = spawn(
    process.execPath,
    [MAIN, "continue", join(folder, "lines.csv"), ...SETTINGS, "--workers", "1", "--out", join(folder, "one")],
    {stdio: "ignore"},
  );
  expect((await once(whole, "close"))[0]).toBe(5);
  undisturbed = digests(join(folder, "one"));
  await until(() => log.includes("Ready to accept connections"));
}, 120_000);
afterAll(async () => {
  server.kill();
  await once(server, "close");
  rmSync(folder, {recursive: true, force: true});
});

test("workers that come before and after, one of them killed at work: the bytes of one process", async () => {
  const out = join(folder, "killed");
  const first = worker(`${address}/0`);
  await until(() => first.said.err.includes("waits for lines"));
  const submitter = submit(`${address}/0`, out);
  await until(() => first.said.out.split("\n").length > 3);
  const second = worker(`${address}/0`);
  await until(() => first.said.out.split("\n").length > 5);
  first.process.kill("SIGKILL");
  expect(await first.end).toBeNull();
  expect(existsSync(join(out, "lines.csv"))).toBe(false);
  expect(await submitter.end).toBe(5);
  expect(digests(out)).toEqual(undisturbed);
  expect(second.said.out).toMatch(/^L\d+: (done|doubtful|failed)$/m);
  expect(submitter.said.err).toMatch(/line L7 · The station in row/);
  second.process.kill("SIGINT");
  expect(await second.end).toBe(130);
});

test("a run submitted twice is computed once, also after an interruption; gather writes the files", async () => {
  const out = join(folder, "detached");
  const first = submit(`${address}/1`, out);
  await until(() => existsSync(join(out, PARTS, "request.json")));
  first.process.kill("SIGINT");
  expect(await first.end).toBe(130);
  const second = submit(`${address}/1`, out, "--detach");
  expect(await second.end).toBe(0);
  expect(second.said.out).toContain(`${LINES} of ${LINES} lines are in the queue`);
  const only = worker(`${address}/1`, ["--idle", "0.5"]);
  expect(await only.end).toBe(0);
  expect(only.said.out.trim().split("\n")).toHaveLength(LINES);
  const gather = start(["gather", "--out", out]);
  expect(await gather.end).toBe(5);
  expect(digests(out)).toEqual(undisturbed);
});

test("a line that kills its process is given up after three tries, and no other with it", async () => {
  const out = join(folder, "poison");
  const poison = join(folder, "poison.mjs");
  // Ends the process where a thread, not the worker itself, puts line L3 on the disk.
  writeFileSync(
    poison,
    `import files from "node:fs/promises";
import {syncBuiltinESMExports} from "node:module";
import {isMainThread} from "node:worker_threads";
const {rename} = files;
files.rename = (from, to) => {
  if (!isMainThread && String(to).endsWith("line-3.parcel")) process.kill(process.pid, "SIGKILL");
  return rename(from, to);
};
syncBuiltinESMExports();
`,
  );
  // The first lines of the same survey are the same lines.
  const survey = join(folder, "few.csv");
  writeFileSync(survey, text.slice(0, text.indexOf("L6,")));
  const submitter = start(["continue", survey, ...SETTINGS, "--queue", `${address}/2`, "--out", out]);
  let deaths = 0;
  let over = false;
  const ended = submitter.end.finally(() => {
    over = true;
  });
  while (!over) {
    const next = worker(`${address}/2`, [], {NODE_OPTIONS: `--import ${pathToFileURL(poison)}`});
    const status = await Promise.race([next.end, ended.then(() => undefined)]);
    if (status === null) ++deaths;
    else break;
  }
  expect(await ended).toBe(5);
  expect(deaths).toBe(3);
  const lines = (path: string): string[] => readFileSync(join(path, "lines.csv"), "utf8").split("\n");
  const [there, here] = [lines(join(folder, "one")), lines(out)];
  const others = (rows: string[]): string[] => rows.filter((row) => /^L[01245],/.test(row));
  expect(here.find((row) => row.startsWith("L3,"))).toMatch(/failed.*given up after 3 tries/);
  expect(others(here)).toHaveLength(5);
  expect(others(here)).toEqual(others(there));
});

test("another folder on the worker's machine: refused with the reason, and found with --folder", async () => {
  const [before, after] = [join(folder, "here"), join(folder, "there")];
  mkdirSync(before);
  writeFileSync(join(before, "lines.csv"), text);
  const args = ["continue", join(before, "lines.csv"), ...SETTINGS, "--queue", `${address}/3`];
  expect(await start([...args, "--out", join(before, "out"), "--detach"]).end).toBe(0);
  renameSync(before, after);
  const lost = worker(`${address}/3`, ["--idle", "0.2"]);
  expect(await lost.end).toBe(0);
  expect(lost.said.err.replaceAll(/\s+/g, " ")).toMatch(/is refused: .* finds no run in .*--folder FROM=TO/);
  expect(lost.said.out).toBe("");
  expect(await worker(`${address}/3`, ["--idle", "0.2", "--folder", `${before}=${after}`]).end).toBe(0);
  expect(await start(["gather", join(after, "lines.csv"), "--out", join(after, "out")]).end).toBe(5);
  expect(digests(join(after, "out"))).toEqual(undisturbed);
});

describe("a server", () => {
  test("that is killed at work and comes back empty: said on both sides, and the bytes of one process", async () => {
    const out = join(folder, "outage");
    const port = await freePort();
    const own = await startServer({port});
    const helper = worker(`redis://127.0.0.1:${port}`, ["--idle", "30"]);
    await until(() => helper.said.err.includes("waits for lines"));
    const submitter = submit(`redis://127.0.0.1:${port}`, out);
    await until(() => helper.said.out.split("\n").length > 3);
    own.kill("SIGKILL");
    await until(() => /is away: it is waited for/.test(flat(helper.said.err)));
    await until(() => /is away: it is waited for/.test(flat(submitter.said.err)));
    expect(existsSync(join(out, "lines.csv"))).toBe(false);
    await startServer({port});
    expect(await submitter.end).toBe(5);
    expect(digests(out)).toEqual(undisturbed);
    for (const {said} of [submitter, helper]) expect(flat(said.err)).toContain(`127.0.0.1:${port} is back.`);
    expect(flat(submitter.said.err)).not.toContain("[queue/");
  });

  test("that stays away: given up after the time allowed, with what is kept and what to do", async () => {
    const port = await freePort();
    const own = await startServer({port});
    const told: string[] = [];
    const queue = await openQueue(`redis://127.0.0.1:${port}`, {
      lostAfter: 1,
      patience: 2,
      tell: (text) => told.push(text),
    });
    expect(await queue.runs()).toEqual([]);
    own.kill("SIGKILL");
    await until(() => told.length > 0);
    await expect(queue.runs()).rejects.toMatchObject({
      code: "queue/unreachable",
      exitStatus: 2,
      message: expect.stringMatching(
        /was lost \(connect ECONNREFUSED .*Finished lines are kept\..*give the same command again/,
      ),
    });
    expect(told).toEqual([expect.stringContaining("is waited for, 2 s at most")]);
    await queue.close();
  });

  test("that is away does not keep an interruption waiting: status 130, and the same command finishes", async () => {
    const out = join(folder, "interrupted-away");
    const port = await freePort();
    const own = await startServer({port});
    const first = submit(`redis://127.0.0.1:${port}`, out);
    await until(() => existsSync(join(out, PARTS, "request.json")));
    own.kill("SIGKILL");
    await until(() => /is away/.test(flat(first.said.err)));
    first.process.kill("SIGINT");
    expect(await first.end).toBe(130);
    // While its lines are put in, or followed.
    expect(flat(first.said.err)).toMatch(/interrupted: .*the same command (adds the others|joins it again)/i);
    await startServer({port});
    const helper = worker(`redis://127.0.0.1:${port}`);
    expect(await submit(`redis://127.0.0.1:${port}`, out).end).toBe(5);
    expect(digests(out)).toEqual(undisturbed);
    helper.process.kill("SIGINT");
    await helper.end;
  });

  test("with a password: the right one works, a wrong one or none is said to be wrong, and is never printed", async () => {
    const port = await freePort();
    await startServer({port, requirepass: "sesame"});
    const asked = (login: string): Started =>
      start(["worker", "--idle", "0.2", "--queue", `redis://${login}127.0.0.1:${port}`]);
    expect(await asked(":sesame@").end).toBe(0);
    for (const login of [":opensaysme@", ""]) {
      const refused = asked(login);
      expect(await refused.end).toBe(2);
      expect(flat(refused.said.err)).toMatch(
        /does not let this program in.*redis:\/\/:PASSWORD@host:port.*\[queue\/refused-password\]/,
      );
      expect(refused.said.err).not.toContain("opensaysme");
    }
  });

  test("behind TLS: reached by rediss:// where its certificate is trusted, else told how to trust it", async () => {
    const port = await freePort();
    const [key, certificate] = [join(folder, "tls.key"), join(folder, "tls.crt")];
    const made = ["req", "-x509", "-newkey", "rsa:2048", "-nodes", "-days", "2", "-subj", "/CN=queue", "-addext"];
    execFileSync("openssl", [...made, "subjectAltName=IP:127.0.0.1", "-keyout", key, "-out", certificate], {
      stdio: "ignore",
    });
    await startServer({
      port: 0,
      "tls-port": port,
      "tls-cert-file": certificate,
      "tls-key-file": key,
      "tls-ca-cert-file": certificate,
      "tls-auth-clients": "no",
    });
    const asked = (scheme: string, environment: Record<string, string> = {}): Started =>
      start(["worker", "--idle", "0.2", "--queue", `${scheme}://127.0.0.1:${port}`], environment);
    expect(await asked("rediss", {NODE_EXTRA_CA_CERTS: certificate}).end).toBe(0);
    const untrusted = asked("rediss");
    expect(await untrusted.end).toBe(2);
    expect(flat(untrusted.said.err)).toMatch(/certificate.*NODE_EXTRA_CA_CERTS.*\[queue\/unreachable\]/);
    const plain = asked("redis");
    expect(await plain.end).toBe(2);
    expect(flat(plain.said.err)).toMatch(/rediss:\/\/.*\[queue\/unreachable\]/);
  });
});
