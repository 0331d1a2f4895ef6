import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {decimatedBand, decimatedCurve} from "../../lib/report/figures/decimate.ts";
import {rampOver} from "../../lib/report/figures/ramp.ts";
import {escaped, messageText, nameText} from "../../lib/report/html.ts";
import {
  bracketText,
  exactText,
  figureText,
  fixedText,
  metreText,
  percentText,
  tickFormat,
} from "../../lib/report/number-text.ts";
import {selection} from "../../lib/report/selection.ts";
import {signText} from "../../lib/report/strip-table.ts";

describe("numbers for reading", () => {
  test("carry as many digits as they deserve", () => {
    expect(figureText(1234.4)).toBe("1234");
    expect(figureText(0.012345)).toBe("0.0123");
    expect(figureText(-9.996)).toBe("−10.0");
    expect(figureText(0)).toBe("0");
    expect(figureText(1.234e-9)).toBe("1.23 × 10⁻⁹");
    expect(figureText(-4.56e12)).toBe("−4.56 × 10¹²");
    expect(figureText(Number.NaN)).toBe("–");
    expect(fixedText(23845.94, 1)).toBe("23\u202f845.9");
    expect(fixedText(1234567, 0)).toBe("1\u202f234\u202f567");
    expect(fixedText(-0.0001, 2)).toBe("0.00");
    expect([metreText(5.1), metreText(12), metreText(1999.6), metreText(-30)]).toEqual(["5.1", "12", "2000", "−30"]);
    expect([exactText(0.4), exactText(-1.25), exactText(-0)]).toEqual(["0.4", "−1.25", "0"]);
    expect([percentText(0.95), percentText(0.999), percentText(0.68)]).toEqual(["95 %", "99.9 %", "68 %"]);
  });

  test("on an axis, as many decimals as the ticks need", () => {
    const texts = (ticks: readonly number[]) => ticks.map(tickFormat(ticks));
    expect(texts([-0.5, 0, 0.5])).toEqual(["−0.5", "0.0", "0.5"]);
    expect(texts([0, 20_000])).toEqual(["0", "20\u202f000"]);
    expect(texts([0.1, 0.12])).toEqual(["0.10", "0.12"]);
    expect(texts([0, 2e-9])).toEqual(["0", "2.00 × 10⁻⁹"]);
  });

  test("with an interval, two digits of its half-width", () => {
    expect(bracketText(12.3456, 9.1, 15.59)).toBe("12.3 (9.1 to 15.6)");
    expect(bracketText(0.4, -250, 251)).toBe("0 (−250 to 251)");
    expect(bracketText(1e-9, 0, 2e-9)).toBe("1.00 × 10⁻⁹ (0 to 2.00 × 10⁻⁹)");
    expect(bracketText(3, 3, 3)).toBe("3.00");
  });

  test("an end that is not zero is not printed as zero, nor the other way about", () => {
    expect(bracketText(0.2489, -0.003245, 0.501)).toBe("0.249 (−0.003 to 0.501)");
    expect(bracketText(0.25, 0.0004, 0.5)).toBe("0.2500 (0.0004 to 0.5000)");
    expect(bracketText(0.25, 0, 0.5)).toBe("0.25 (0.00 to 0.50)");
    // So near that no sensible number of digits tells it: the words follow what is printed.
    expect(bracketText(0.25, 1e-9, 0.5)).toBe("0.25 (0.00 to 0.50)");
    expect(signText({value: 0.25, lower: 1e-9, upper: 0.5})).toBe("not told from zero");
    const anyEnd = fc
      .tuple(fc.double({min: -10, max: 10, noNaN: true}), fc.integer({min: -12, max: 8}))
      .map(([digits, power]) => Number(digits.toPrecision(9)) * 10 ** power)
      .filter((end) => end === 0 || Math.abs(end) > 1e-100);
    fc.assert(
      fc.property(anyEnd, anyEnd, (one, other) => {
        const [lower, upper] = [Math.min(one, other), Math.max(one, other)];
        const [, low, high] =
          /\((\S+(?: × \S+)?) to (\S+(?: × \S+)?)\)/.exec(bracketText((lower + upper) / 2, lower, upper)) ?? [];
        fc.pre(low !== undefined && high !== undefined);
        const isZero = (text: string): boolean => !/[1-9]/.test(text.split(" ×")[0]!);
        const sign = signText({value: 0, lower, upper});
        expect(sign === "above zero").toBe(!low!.startsWith("−") && !isZero(low!));
        expect(sign === "below zero").toBe(high!.startsWith("−") && !isZero(high!));
      }),
      {seed: 20_261_201},
    );
  });

  test("the sign is told only when the interval leaves out zero", () => {
    expect(signText({value: 1, lower: 0.1, upper: 2})).toBe("above zero");
    expect(signText({value: -1, lower: -2, upper: -0.1})).toBe("below zero");
    for (const lower of [-1, 0]) expect(signText({value: 1, lower, upper: 2})).toBe("not told from zero");
  });
});

describe("markup", () => {
  test("is made harmless", () => {
    expect(escaped(`<a href="x" title='y'>&amp;`)).toBe("&lt;a href=&quot;x&quot; title=&#39;y&#39;&gt;&amp;amp;");
    expect(escaped("a\u0000\u000b\ud83d\ud83d\ude00\tb\n")).toBe("a\ufffd\ufffd\ufffd\ud83d\ude00\tb\n");
    expect(nameText("n".repeat(100))).toBe(`${"n".repeat(79)}…`);
    expect(messageText("Raise --noise <b>.")).toBe('Raise <span class="o">--noise</span> &lt;b&gt;.');
  });
});

describe("thinning out", () => {
  const points = fc.array(fc.tuple(fc.integer({min: 0, max: 4000}), fc.integer({min: -50, max: 50})), {
    minLength: 1,
    maxLength: 300,
  });

  test("keeps the ends and the extremes of every pixel column, at most four points of each", () => {
    fc.assert(
      fc.property(points, (pairs) => {
        const sorted = [...pairs].sort((a, b) => a[0] - b[0]);
        const x = sorted.map(([at]) => at / 100);
        const y = sorted.map(([, value]) => value);
        const kept = decimatedCurve(x, y);
        for (const column of new Set(x.map(Math.floor))) {
          const all = y.filter((_, i) => Math.floor(x[i]!) === column);
          const some = kept.y.filter((_, i) => Math.floor(kept.x[i]!) === column);
          expect(some.length).toBeLessThanOrEqual(4);
          expect([some[0], some.at(-1)]).toEqual([all[0], all.at(-1)]);
          expect([Math.min(...some), Math.max(...some)]).toEqual([Math.min(...all), Math.max(...all)]);
        }
        const band = decimatedBand(x, y, y);
        expect(band.x).toHaveLength(new Set(x.map(Math.floor)).size);
        expect([Math.min(...band.low), Math.max(...band.high)]).toEqual([Math.min(...y), Math.max(...y)]);
      }),
      {seed: 20_260_102},
    );
  });

  test("does not draw across a gap", () => {
    const kept = decimatedCurve([0, 1, Number.NaN, 5, 6], [1, 2, Number.NaN, 3, 4]);
    expect(kept.y).toEqual([1, 2, Number.NaN, 3, 4]);
    expect(decimatedBand([0, Number.NaN, 2], [1, Number.NaN, 1], [2, Number.NaN, 3]).low).toEqual([1, Number.NaN, 1]);
  });
});

test("a ramp leaves out spikes, and copes with constants and nothing", () => {
  const ramp = rampOver([...Array.from({length: 999}, (_, k) => k / 998), 1e9]);
  expect(ramp.high).toBeLessThan(1.1);
  expect([ramp.classOf(-5), ramp.classOf(0.51), ramp.classOf(1e9)]).toEqual([0, 16, 31]);
  expect(rampOver([3, 3]).classOf(3)).toBe(16);
  expect(rampOver([Number.NaN]).classOf(0.5)).toBe(16);
});

describe("a selection", () => {
  const keep = (total: number, limit: number, gravity: (index: number) => number): readonly number[] => {
    const chosen = selection<number>(total, limit);
    for (let index = 0; index < total; ++index) chosen.offer(index, gravity(index), () => index);
    expect(chosen.offered()).toBe(total);
    return chosen.kept();
  };

  test("keeps all while they are few", () => {
    expect(keep(5, 5, () => 0)).toEqual([0, 1, 2, 3, 4]);
  });

  test("keeps an even sample and the gravest when they are many, in the order of the survey", () => {
    const grave = new Map([
      [11, 3],
      [12, 5],
      [13, 4],
      [50, 1],
    ]);
    const kept = keep(100, 6, (index) => grave.get(index) ?? 0);
    expect(kept).toEqual([11, 12, 13, 33, 66, 99]);
  });

  test("never holds more than its limit, and makes nothing it does not keep", () => {
    const chosen = selection<number>(1000, 10);
    let made = 0;
    for (let index = 0; index < 1500; ++index) chosen.offer(index, index < 800 ? 0 : 1, () => ++made);
    expect(chosen.kept()).toHaveLength(10);
    expect(made).toBe(10);
  });
});
