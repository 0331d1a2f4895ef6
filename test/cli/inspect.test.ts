/** A look at files: what is told with much known, and with little. */
import {describe, expect, test} from "vitest";
import {effectiveDirection} from "../../lib/potential/effective-direction.ts";
import {fileWith, gridBytes, run, surveyText} from "./harness.ts";

const flat = (text: string): string => text.replaceAll(/\s+/g, " ");

describe("inspect", () => {
  test("prints tables of the lines, agreement of neighbours and what is not corrected, within 100 columns", async () => {
    const survey = fileWith("lines.csv", surveyText(["L1", "L2"]));
    const {status, out, err} = await run(["inspect", survey, "--observable", "gravity"]);
    expect(status).toBe(0);
    expect(out).toMatch(/^L1 +G1 +60 +0 +0 +590 +10\.0 +0 /m);
    expect(out).toMatch(/readings mGal +noise mGal/);
    expect(out).toMatch(/^L1 +30 +0\.33 /m);
    expect(out).toMatch(/^L1 +L2 +0 +0 +590 +0\.\d\d /m);
    expect(flat(out)).toMatch(/Median correlation of neighbours 0\.\d\d\. /);
    expect(flat(out)).toMatch(/terrain: The attraction of hills/);
    // Magnetic corrections do not concern gravity.
    expect(flat(out)).not.toMatch(/reference field:/);
    for (const line of out.split("\n")) expect(line.length).toBeLessThanOrEqual(100);
    expect(flat(err)).toMatch(/Columns: .*value from "gravity" \(recognised\)/);
  });

  test("explains once why noise may be partly signal, and not where it is sound", async () => {
    const meaning = /partly signal\?: stations are farther apart than a tenth of the height/g;
    // 10 m apart: more than a tenth of 30 m, less than one of 300 m.
    const survey = fileWith("lines.csv", surveyText(["L1", "L2"], 2000));
    const low = (await run(["inspect", survey, "--observable", "gravity"])).out;
    expect(low.match(/partly signal\?$/gm)).toHaveLength(2);
    expect(flat(low).match(meaning)).toHaveLength(1);
    const higher = fileWith("lines.csv", surveyText(["L1", "L2"], 2000).replaceAll(",30,", ",300,"));
    const high = (await run(["inspect", higher, "--observable", "gravity"])).out;
    expect(high.match(/sound$/gm)).toHaveLength(2);
    expect(high).not.toMatch(/partly signal/);
  });

  test("reads the noise of the record as that of the length given, with an observable or without", async () => {
    const survey = fileWith("lines.csv", surveyText(["L1"], 2000));
    const channelOf = async (...own: readonly string[]) =>
      JSON.parse((await run(["inspect", survey, ...own, "--json"])).out).lines[0].channels[0];
    const white = await channelOf("--observable", "gravity");
    const red = await channelOf("--observable", "gravity", "--noise-length", "40");
    expect([white.noiseLength, red.noiseLength]).toEqual([0, 40]);
    // Stations 10 m apart: σ is read off differences that are 0.376 of those of white noise.
    expect(red.noise.sigma / white.noise.sigma).toBeCloseTo(1 / Math.sqrt(0.14168461826), 6);
    expect((await channelOf("--noise-length", "40")).noise.sigma).toBe(red.noise.sigma);
  });

  test("needs no observable and no height: says so, and shows no unit and no height that nobody gave", async () => {
    const survey = fileWith("lines.csv", surveyText().replace("clearance", "weather"));
    const {status, out, err} = await run(["inspect", survey]);
    expect(status).toBe(0);
    expect(flat(err)).toMatch(/No --observable was given: readings stand in the unit of the file/);
    expect(flat(err)).toMatch(
      /No height of the sensor is known: heights are left out\. Give --clearance H or --elevation Z/,
    );
    expect(out).not.toMatch(/mGal {2}|nT|(clearance|elevation) m/);
    expect(flat(out)).toMatch(/reference field: .*terrain: /);
    const object = JSON.parse((await run(["inspect", survey, "--json"])).out);
    expect(object.filledIn).toHaveLength(2);
    expect(object.lines[0].heights).toEqual([]);
    expect(object.lines[0].channels[0]).not.toHaveProperty("unit");
  });

  test("takes the observable that the file's own names speak of", async () => {
    const magnetic = surveyText().replace("gravity", "anomaly_nT");
    const {out} = await run(["inspect", fileWith("lines.csv", magnetic), "--json"]);
    // Read as gravity it would carry the doubt that the column is named as if in nT.
    expect(JSON.parse(out).notices.map(({code}: {code: string}) => code)).not.toContain("column/unit");
  });

  test("--json holds readings in the unit it names, and lengths in metres", async () => {
    const survey = fileWith("lines.csv", surveyText(["L1", "L2"]));
    const {status, out, err} = await run(["inspect", survey, "--observable", "gravity", "--unit", "uGal", "--json"]);
    expect({status, err}).toEqual({status: 0, err: ""});
    const {lines, kind, notCorrected, neighbours} = JSON.parse(out);
    expect(kind).toBe("lines");
    expect(lines).toHaveLength(2);
    const values = surveyText(["L1"])
      .trimEnd()
      .split("\n")
      .slice(1)
      .map((row) => Number(row.split(",")[3]));
    // Taken as µGal, shown in mGal.
    expect(lines[0].channels[0]).toMatchObject({unit: "mGal", observable: "gravity"});
    expect(lines[0].channels[0].readings.greatest).toBeCloseTo(Math.max(...values) / 1000, 9);
    expect(lines[0].spacing.median).toBe(10);
    expect(neighbours.pairs).toHaveLength(1);
    expect(notCorrected.length).toBeGreaterThan(3);
  });

  test("the noise it finds is that of the data: 0.02 mGal, white", async () => {
    const {out} = await run([
      "inspect",
      fileWith("lines.csv", surveyText(["L1"], 2000)),
      "--observable",
      "gravity",
      "--json",
    ]);
    const {noise} = JSON.parse(out).lines[0].channels[0];
    // Median of 2,000 fourth differences, correlated over 5: standard error about 2.5 %; four of them.
    expect(Math.abs(noise.sigma / 0.02 - 1)).toBeLessThan(0.1);
    expect(noise.white).toBe(true);
  });

  test("a grid: its first rows, no noise of the record, no neighbours", async () => {
    const {status, out, err} = await run(["inspect", fileWith("grid.tif", gridBytes(24, 30))]);
    expect(status).toBe(0);
    expect(flat(err)).toMatch(/Grid of 24 × 30 pixels/);
    expect(out).toMatch(/^The first 12 of 30 rows; --json gives all\.$/m);
    expect(out).not.toMatch(/partly signal/);
    const columns = await run(["inspect", fileWith("grid.tif", gridBytes(24, 30)), "--profiles", "columns"]);
    expect(columns.out).toMatch(/^The first 12 of 24 columns; --json gives all\.$/m);
    expect(out).toMatch(/not known$/m);
    expect(JSON.parse((await run(["inspect", fileWith("grid.tif", gridBytes()), "--json"])).out).lines).toHaveLength(5);
  });

  test("a bad file is refused as it is by continue", async () => {
    const {status, out, err} = await run(["inspect", fileWith("a.csv", `${surveyText()}L1,700,30,bad\n`)]);
    expect({status, out}).toEqual({status: 2, out: ""});
    expect(flat(err)).toMatch(/a\.csv:62:gravity · .*"bad"/);
  });

  test("when no observable fits, the refusal is that of the one that came furthest", async () => {
    const total = surveyText().replaceAll(/[-\d.]+\n/g, "46000\n");
    const {status, err} = await run(["inspect", fileWith("a.csv", total)]);
    expect(status).toBe(2);
    expect(err).toMatch(/value\/not-an-anomaly/);
  });

  test("an option of continue that means nothing here is unknown", async () => {
    const {status, err} = await run(["inspect", "a.csv", "--support", "0:1"]);
    expect(status).toBe(2);
    expect(err).toMatch(/--support is no option here/);
  });

  describe("the Earth's field along each line", () => {
    /** A line of total field towards `azimuth`, on a flat map whose north is true. */
    const magnetic = (azimuth: number): string => {
      const rows = ["line,x,y,clearance,tfa"];
      const [east, north] = [Math.sin((azimuth * Math.PI) / 180), Math.cos((azimuth * Math.PI) / 180)];
      for (let i = 0; i < 40; ++i)
        rows.push(`M1,${5000 + 5 * i * east},${9000 + 5 * i * north},30,${(20 * Math.sin(i / 6)).toFixed(3)}`);
      return fileWith("m.csv", `${rows.join("\n")}\n`);
    };
    const options = ["--observable", "total-field-anomaly", "--column", "value=tfa"];

    test("is shown where a direction is given, and nothing of it where not", async () => {
      const survey = magnetic(40);
      const given = [...options, "--inclination", "62", "--declination", "3"];
      const {status, out} = await run(["inspect", survey, ...given]);
      const want = effectiveDirection(62, 3, 40);
      expect(status).toBe(0);
      expect(out).toMatch(new RegExp(`^M1 +${want.inclination.toFixed(1)} +${want.beta.toFixed(3)}$`, "m"));
      for (const line of out.split("\n")) expect(line.length).toBeLessThanOrEqual(100);
      const [line] = JSON.parse((await run(["inspect", survey, ...given, "--json"])).out).lines;
      expect(line.fieldAlong.beta).toBeCloseTo(want.beta, 9);
      expect(line.fieldAlong.inclination).toBeCloseTo(want.inclination, 7);
      expect((await run(["inspect", survey, ...options])).out).not.toMatch(/β/);
    });

    test("is a doubt where it is horizontal and square to the line, or where no azimuth is known", async () => {
      const level = [...options, "--inclination", "0", "--declination", "130"];
      const {status, out, err} = await run(["inspect", magnetic(40), ...level]);
      expect(status).toBe(0);
      expect(flat(err)).toMatch(/β = .* \[direction\/along-strike\]/);
      expect(out).not.toMatch(/β/);
      const chainageOnly = fileWith("lines.csv", surveyText());
      const other = await run(["inspect", chainageOnly, "--inclination", "62", "--declination", "3"]);
      expect(other.status).toBe(0);
      expect(flat(other.err)).toMatch(/only its chainage is known.*\[direction\/no-azimuth\]/);
    });

    test("a day outside the models, or half a direction, is refused", async () => {
      const survey = magnetic(40);
      const day = [...options, "--crs", "EPSG:32632", "--date", "1999-01-01"];
      const late = await run(["inspect", survey, ...day]);
      expect(late.status).toBe(2);
      expect(late.err).toMatch(/direction\/date/);
      const half = await run(["inspect", survey, ...options, "--inclination", "62"]);
      expect(half.status).toBe(2);
      expect(half.err).toMatch(/option\/direction/);
    });
  });
});
