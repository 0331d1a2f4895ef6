import {describe, expect, test} from "vitest";
import {doubt} from "../../lib/notice.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {gravityGradient} from "../../lib/potential/gravity-gradient.ts";
import {gridReportHtml} from "../../lib/products/grid-report-html.ts";
import {reportHtml} from "../../lib/products/report-html.ts";
import {CAUTIONS, cautionSentence, cautionsFor} from "../../lib/report/cautions.ts";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import type {Survey} from "../../lib/survey/survey.ts";
import {type Page, parsedPage} from "../harness/markup.ts";
import {
  doneLine,
  failedLine,
  frameFixture,
  GAP_REMARK,
  RESIDUAL_DOUBT,
  rowOutcome,
  settingsFixture,
  surveyFixture,
} from "../harness/study-fixture.ts";
import {keptText} from "../harness/text-sink.ts";

const about = {version: "0.1.0", settings: settingsFixture()};

async function lineReport(outcomes: readonly LineOutcome[], survey: Partial<Survey> = {}): Promise<string> {
  const sink = keptText();
  const product = reportHtml(sink, about);
  await product.begin(frameFixture({survey: surveyFixture({lineCount: outcomes.length, ...survey})}));
  for (const outcome of outcomes) await product.line(outcome);
  await product.end();
  return sink.text();
}

async function gridReport(orientation: "rows" | "columns" = "rows", width = 40, height = 30): Promise<string> {
  const sink = keptText();
  const product = gridReportHtml(sink, about);
  const [count, length] = orientation === "rows" ? [height, width] : [width, height];
  const survey = surveyFixture({
    kind: "grid",
    lineCount: count,
    grid: {width, height, orientation, step: 25, spacing: 25},
  });
  await product.begin(frameFixture({survey}));
  for (let index = 0; index < count; ++index)
    await product.row(index === 7 ? skippedRow(index) : rowOutcome(index, length));
  await product.end();
  return sink.text();
}

const skippedRow = (index: number) => {
  const line = failedLine(`row ${index + 1}`, "skipped");
  if ("study" in line) throw new Error("a failed line has no study");
  return {...line, status: "skipped" as const, index};
};

/** What no page may hold: a way out, or a way in. */
function expectSealed(html: string, page: Page): void {
  expect(html).toContain(`content="default-src 'none'; style-src 'unsafe-inline'; img-src data:"`);
  // Base64 may hold two slashes; what pictures are is checked below.
  const bare = html.replace(/data:image\/png;base64,[A-Za-z0-9+/=]+/g, "");
  expect(/https?:|\/\/[a-z]|<script|javascript:|@import|url\(/i.exec(bare)?.[0]).toBeUndefined();
  expect(page.tags).not.toContain("script");
  for (const [tag, name, value] of page.attributes) {
    expect(name).not.toMatch(/^on/);
    if (name === "href") expect(value).toMatch(tag === "image" ? /^data:image\/png;base64,[A-Za-z0-9+/=]+$/ : /^#/);
    if (name === "src") throw new Error(`${tag} loads ${value}`);
  }
}

const squeezed = (text: string): string => text.replace(/\s+/g, " ");

describe("a run over lines", () => {
  const outcomes = [
    doneLine(),
    doneLine({id: "L102", seed: 2, reversed: true, notices: [RESIDUAL_DOUBT, GAP_REMARK], basis: "given-bound"}),
    failedLine("L103"),
  ];

  test("is one sealed, well-formed page", async () => {
    const html = await lineReport(outcomes);
    expectSealed(html, parsedPage(html));
  });

  test("tells the answer before doubts and doubts before the lines; cautions near the top and at the end", async () => {
    const {text} = parsedPage(await lineReport(outcomes));
    const flat = squeezed(text);
    const first = cautionSentence(cautionsFor("lines")[0]!);
    expect(flat.indexOf(first)).toBeGreaterThan(0);
    const order = [
      "The answer",
      "dyke",
      "Station 14 of line L103",
      "Where the lines run",
      "Settings",
      "Line L101",
      "Once more",
    ];
    const places = order.map((word) => flat.indexOf(word, flat.indexOf("The answer")));
    expect(places.every((place) => place > 0)).toBe(true);
    expect([...places].sort((a, b) => a - b)).toEqual(places);
    expect(flat.indexOf(first)).toBeLessThan(places[0]!);
    for (const caution of cautionsFor("lines"))
      expect(flat.indexOf(cautionSentence(caution), places.at(-1)!)).toBeGreaterThan(0);
  });

  test("lists doubts, remarks and failures, with what to do", async () => {
    const flat = squeezed(parsedPage(await lineReport(outcomes)).text);
    // Once for the run, once with the line.
    for (const {message} of [RESIDUAL_DOUBT, GAP_REMARK])
      expect(flat.split(squeezed(message).slice(0, 60)).length - 1).toBe(2);
    expect(flat).toContain("Line L103. Station 14 of line L103 is 0.4 m below the boundary");
    expect(flat).toContain("1 done, 1 doubtful, 1 failed");
  });

  test("tells alike doubts once, with the number of lines and the first of them", async () => {
    const many = Array.from({length: 12}, (_, k) => doneLine({id: `N${k}`, notices: [RESIDUAL_DOUBT]}));
    const flat = squeezed(parsedPage(await lineReport(many)).text);
    expect(flat).toContain("12 lines (N0, N1, N2, N3, N4, N5, N6, N7 and 4 more). On N0: The residual is not white");
  });

  test("says of each line what its intervals rest on, how fine it sees and how many readings are used", async () => {
    const html = await lineReport(outcomes);
    const part = (name: string): string => {
      const from = html.indexOf(`<h2>Line ${name}`);
      return squeezed(parsedPage(html.slice(from, html.indexOf("</section>", from))).text);
    };
    expect(part("L101")).toContain("Assumed bound.");
    expect(part("L101")).not.toContain("Given bound.");
    expect(part("L102")).toContain("Given bound.");
    expect(part("L101")).toContain("Features narrower than 5.1 m are not in the data");
    expect(part("L101")).toContain("31.4 used of 221");
    expect(part("L101")).toContain("the largest multiplier whose misfit stays at what the noise allows");
  });

  test("prints strips in physical units with their intervals and what they say of the sign", async () => {
    // f = 120 nT · 0.97 + 1.2 nT over the whole strip, ± 7.2 nT, times 2/μ0.
    const flat = squeezed(parsedPage(await lineReport([doneLine()])).text);
    const [mean, half] = [(117.6e-9 * 2) / 1.25663706127e-6, (7.2e-9 * 2) / 1.25663706127e-6];
    expect(flat).toContain(
      `L101 ${mean.toFixed(3)} (${(mean - half).toFixed(3)} to ${(mean + half).toFixed(3)}) ${(20 * mean).toFixed(2)}`,
    );
    expect(flat).toContain("above zero");
    expect(flat).toContain("not told from zero");
  });

  test("shows gravity in its own units", async () => {
    const sink = keptText();
    const {acquisition} = settingsFixture();
    const channels = [{role: "value", observable: "gravity", unit: undefined, noise: 0.02}];
    const settings = settingsFixture({acquisition: {...acquisition, channels}});
    const product = reportHtml(sink, {...about, settings});
    await product.begin(frameFixture({observable: gravity}));
    await product.line(doneLine({observable: gravity, strength: 2e-5, noise: 2e-7}));
    await product.end();
    const flat = squeezed(parsedPage(sink.text()).text);
    for (const unit of ["kg/m2", "kg/m, per metre of strike", "mGal·√m", "noise 0.02 mGal given"])
      expect(flat).toContain(unit);
    expect(flat).not.toMatch(/\bnT\b/);
  });

  test("names every channel with its noise, and what the mean of a strip is of", async () => {
    const sink = keptText();
    const {acquisition} = settingsFixture();
    const channels = [
      {role: "value", observable: "gravity", unit: undefined, noise: 0.02},
      {role: "value.2", observable: "gravity-gradient", unit: undefined, noise: 1.5},
    ];
    const product = reportHtml(sink, {...about, settings: settingsFixture({acquisition: {...acquisition, channels}})});
    await product.begin(frameFixture({observable: gravity}));
    const outcome = doneLine({observable: gravity, strength: 2e-5, noise: 2e-7});
    if (!("study" in outcome)) throw new Error("the fixture has a study");
    const {study} = outcome;
    const [heard] = study.conditioned.channels;
    const second = {...heard, channel: {...heard.channel, role: "value.2", observable: gravityGradient}, noise: 1.5e-9};
    await product.line({
      ...outcome,
      study: {
        ...study,
        conditioned: {...study.conditioned, channels: [heard, second]},
        noises: [...study.noises, {...study.noises[0]!, role: "value.2", given: 1.5e-9}],
      },
    });
    await product.end();
    const flat = squeezed(parsedPage(sink.text()).text);
    expect(flat).toContain("Readings, value gravity, in mGal; noise 0.02 mGal given");
    expect(flat).toContain("Readings, value.2 gravity-gradient, in E; noise 1.5 E given");
    expect(flat).toContain("value: 0.0200 mGal, as given; value.2: 1.50 E, as given");
    expect(flat).toContain("value.2: given 1.50");
    expect(flat).toContain("Mean surface density");
    expect(squeezed(parsedPage(await lineReport([doneLine()])).text)).toContain("Mean sheet magnetisationA/m");
  });

  test("never lets a name become markup, wherever it stands", async () => {
    const evil = `<script>alert("1")</script>&amp;'><img src=x onerror=y>`;
    const html = await lineReport(
      [
        doneLine({id: evil, strips: [{name: evil, from: 10, to: 90, group: evil}], notices: [doubt("a/b", evil)]}),
        failedLine(evil),
      ],
      {files: [evil], delivered: evil, notices: [doubt("a/c", evil)]},
    );
    const page = parsedPage(html);
    expectSealed(html, page);
    expect(page.tags).not.toContain("img");
    expect(page.text).toContain(evil);
  });

  test("cuts endless names and messages short, and takes out what HTML does not allow", async () => {
    const endless = "x".repeat(5_000_000);
    const html = await lineReport([doneLine({id: `${endless}\u0000\u0007\ud800`, notices: [doubt("a/b", endless)]})]);
    expect(html.length).toBeLessThan(400_000);
    const odd = await lineReport([doneLine({id: "a\u0000b\ud800c"})]);
    expect(odd).toContain("a\ufffdb\ufffdc");
  });

  test("gives the same bytes for the same studies", async () => {
    expect(await lineReport(outcomes)).toBe(await lineReport(outcomes));
  });

  test("survives a run in which nothing could be answered", async () => {
    const html = await lineReport([failedLine("a"), failedLine("b")]);
    expectSealed(html, parsedPage(html));
    expect(html).toContain("No line could be answered");
  });

  test("has a north arrow over projected coordinates only, and says when there is no map", async () => {
    const of = (coordinates: "projected" | "degrees" | "none") => lineReport([doneLine({coordinates})]);
    expect(await of("projected")).toContain("grid N");
    expect(await of("degrees")).not.toContain("grid N");
    expect(await of("none")).not.toContain("grid N");
    expect(await of("none")).toContain("so this is no map");
    // 220 m fill the height of the map whatever the coordinates: the same bar for metres and degrees.
    for (const coordinates of ["projected", "degrees"] as const) expect(await of(coordinates)).toContain(">50 m<");
  });

  test("puts doubts about the survey as a whole, those found at its end too, before those of lines", async () => {
    const sink = keptText();
    const product = reportHtml(sink, about);
    await product.begin(frameFixture());
    await product.line(doneLine({notices: [RESIDUAL_DOUBT]}));
    await product.end([doubt("x/across", "Lines <3> & 4 differ."), doubt("x/across", "So do 5 and 6.")]);
    const html = sink.text();
    const doubts = html.slice(html.indexOf('id="doubts"'), html.indexOf("Before anyone relies"));
    const places = ["Lines &lt;3&gt; &amp; 4 differ.", "So do 5 and 6.", "The residual is not white"].map((words) =>
      doubts.indexOf(words),
    );
    expect(places[0]).toBeGreaterThan(0);
    expect(places).toEqual([...places].sort((one, other) => one - other));
  });

  test("stays bounded over many lines, with the gravest among those shown in full", async () => {
    const sink = keptText();
    const product = reportHtml(sink, about);
    const lineCount = 300;
    await product.begin(frameFixture({survey: surveyFixture({lineCount})}));
    for (let k = 0; k < lineCount; ++k)
      await product.line(
        doneLine({id: `K${k}`, step: 4, strips: [], notices: k === 123 ? [RESIDUAL_DOUBT, doubt("x/y", "odd")] : []}),
      );
    await product.end();
    const html = sink.text();
    expect(html.split('<section class="line"').length - 1).toBe(21);
    expect(html).toContain("<h2>Line K123 ");
    expect(html).toContain("21 lines of 300 follow in full");
    expect(html).toContain('href="#line-124"');
    parsedPage(html);
  });
});

describe("a run over a grid", () => {
  test("is one sealed, well-formed page that says it is row by row", async () => {
    for (const orientation of ["rows", "columns"] as const) {
      const html = await gridReport(orientation);
      const page = parsedPage(html);
      expectSealed(html, page);
      const flat = squeezed(page.text);
      for (const caution of CAUTIONS) expect(flat.split(cautionSentence(caution)).length - 1).toBeGreaterThanOrEqual(2);
      expect(flat).toContain(`continued ${orientation === "rows" ? "row by row" : "column by column"}`);
      expect(flat).toContain("1 skipped");
    }
  });

  test("holds a picture of source and half-width and of every level, as PNG", async () => {
    const {attributes} = parsedPage(await gridReport());
    const pictures = attributes.filter(([tag, name]) => tag === "image" && name === "href");
    expect(pictures).toHaveLength(6);
    for (const [, , data] of pictures) {
      const bytes = Buffer.from(data.slice(data.indexOf(",") + 1), "base64");
      expect(bytes.subarray(1, 4).toString("latin1")).toBe("PNG");
      expect([bytes.readUInt32BE(16), bytes.readUInt32BE(20)]).toEqual([40, 30]);
    }
  });

  test("gives the same bytes for the same rows", async () => {
    expect(await gridReport()).toBe(await gridReport());
  });
});

test("the reason for a grid's multiplier is told whole, however long", async () => {
  const sink = keptText();
  const product = gridReportHtml(sink, about);
  await product.begin(
    frameFixture({
      survey: surveyFixture({
        kind: "grid",
        lineCount: 1,
        grid: {width: 40, height: 1, orientation: "rows", step: 25, spacing: 25},
      }),
    }),
  );
  const row = rowOutcome(0, 40);
  if (!("study" in row)) throw new Error("the fixture is an answered row");
  const reason = `by ${"rows spread over the grid, ".repeat(20)}and that is the end`;
  await product.row({...row, study: {...row.study, choice: {...row.study.choice, reason}}});
  await product.end();
  expect(sink.text()).toContain(reason);
});
