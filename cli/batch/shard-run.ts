/** One shard of a run: its lines and no files, which `gather` writes once every shard is done. */
import {InputError} from "../../lib/errors.ts";
import {type BatchPlan, openBatch} from "./batch.ts";
import {lockShard, refuseShards} from "./lock.ts";
import {openParts} from "./parts.ts";
import {placesOf, type Shard} from "./shard.ts";

/** @returns the exit status: a line that failed is recorded for `gather` to tell, and no failure of the shard */
export async function shardRun(plan: BatchPlan, shard: Shard): Promise<number> {
  const {host, form, opened, out} = plan;
  const {lineCount, kind} = opened.survey;
  if (kind === "grid")
    throw new InputError(
      "option/lines-only",
      "--shard shares out the lines of a survey, but the survey is a grid, whose rows share one operator. Leave it out.",
    );
  if (plan.replace) await clearOther(plan);
  const unlock = await lockShard(host, out, `${shard.part}-of-${shard.of}`);
  try {
    const batch = await openBatch(plan);
    const places = placesOf(shard, lineCount);
    const before = places.filter((place) => batch.notes.has(place)).length;
    if (!(await batch.compute(places))) {
      host.err.write(`interrupted: ${batch.kept()}\n`);
      return 130;
    }
    const failed = places.filter((place) => batch.notes.get(place)?.status === "failed").length;
    const told = {
      shard: `${shard.part}/${shard.of}`,
      lines: places.length,
      computed: places.length - before,
      taken_over: before,
      failed,
      parts: batch.parts.path,
    };
    host.out.write(
      form.json
        ? `${JSON.stringify(told, undefined, 2)}\n`
        : `shard ${told.shard}: ${told.lines} of ${lineCount} lines, ${told.computed} computed now, ${before} before, ${failed} failed\nWhen every shard is done: groundward gather --out ${out}\n`,
    );
    return 0;
  } finally {
    await unlock();
  }
}

/** Lines of another run go before the first lock of this one is there; not under the hands of shards at work. */
async function clearOther({host, opened, out}: BatchPlan): Promise<void> {
  const parts = openParts(host, out);
  const head = await parts.head();
  if (head === undefined || head.run === opened.digest) return;
  await refuseShards(host, out);
  await parts.dispose();
}
