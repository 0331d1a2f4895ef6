/**
 * Helper of epsg-table.py: reads candidates (JSON) from standard input and writes, for each,
 * by how many metres proj4 differs from the positions that PROJ gave, forward and inverse,
 * and whether the axes x, y are right-handed.
 */
import {readFileSync} from "node:fs";
import proj4 from "proj4";

const METRES_PER_DEGREE = 111_320;

function judge({definition, geographic, points}) {
  let error = 0;
  let rightHanded = true;
  const factor = Number(/\+to_meter=(\S+)/.exec(definition)?.[1] ?? 1);
  try {
    const converter = proj4(geographic, definition);
    for (const [lon, lat, x, y] of points) {
      const [gotX, gotY] = converter.forward([lon, lat], true);
      error = Math.max(error, Math.hypot(gotX - x, gotY - y) * factor);
      const [gotLon, gotLat] = converter.inverse([x, y], true);
      const turn = ((gotLon - lon + 540) % 360) - 180;
      const east = turn * METRES_PER_DEGREE * Math.cos((lat * Math.PI) / 180);
      error = Math.max(error, Math.hypot(east, (gotLat - lat) * METRES_PER_DEGREE));
      const step = 1e-4;
      const [eastX, eastY] = converter.forward([lon + step, lat], true);
      const [northX, northY] = converter.forward([lon, lat + step], true);
      rightHanded &&= (eastX - gotX) * (northY - gotY) - (northX - gotX) * (eastY - gotY) > 0;
      if (!Number.isFinite(error)) return {error: 1e99, rightHanded, problem: "proj4 gives no number"};
    }
    return {error, rightHanded, problem: null};
  } catch (cause) {
    const text = String(cause?.message ?? cause);
    return {
      error: 1e99,
      rightHanded,
      problem: text.includes("Could not get projection name") ? "proj4 lacks the projection" : `proj4 fails`,
    };
  }
}

process.stdout.write(JSON.stringify(JSON.parse(readFileSync(0, "utf8")).map(judge)));
