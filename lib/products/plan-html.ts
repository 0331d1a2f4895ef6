/** plan.html: the tables of a plan with their figures on one self-contained page. */
import {cautionBox} from "../report/caution-box.ts";
import {deliveryOf} from "../report/delivery.ts";
import {halfWidthFigure, resolutionFigure} from "../report/figures/plan.ts";
import {escaped} from "../report/html.ts";
import {counted, exactText, figureText, metreText, percentText} from "../report/number-text.ts";
import {PAGE_END, pageStart} from "../report/page.ts";
import {planNotes} from "../report/plan-words.ts";
import {definitionList} from "../report/settings-text.ts";
import type {Plan, PlanCase} from "../study/plan.ts";
import type {TextSink} from "./product.ts";

interface Cell {
  readonly head: string;
  readonly text: string;
}

const list = (values: readonly number[]): string => values.map((value) => metreText(value)).join(", ");

export async function planHtml(sink: TextSink, plan: Plan, version: string): Promise<void> {
  const {settings, cases} = plan;
  const [observable] = settings.observables;
  const delivery = deliveryOf(observable!);
  const {density, total, field, reading} = delivery;
  const asked = settings.stripStrength !== undefined;
  const head = (one: PlanCase): Cell[] => [
    {head: "Clearance <span>m</span>", text: metreText(one.clearance)},
    {head: "Spacing <span>m</span>", text: metreText(one.spacing)},
    {head: `Noise <span>${reading}</span>`, text: noiseText(delivery.toReading(one.noise))},
    {head: "Bound", text: escaped(one.bound.text)},
  ];
  const share = (value: number | undefined, of: number): string =>
    value === undefined ? "–" : figureText(value / of, 3);
  await sink.write(pageStart("Groundward plan"));
  await sink.write(
    `<p class="over">Groundward ${escaped(version)}: what a survey can promise</p><h1>Plan: ${settings.observables.map(({name}) => escaped(name)).join(", ")}</h1>`,
  );
  await sink.write(
    `<p class="lede">${counted(cases.length, "combination")}; ${percentText(settings.confidence)} intervals. Sources: ${escaped(observable!.source.density)}, on the boundary.</p>`,
  );
  await sink.write(
    `<h2>Half-widths</h2><figure>${halfWidthFigure(plan)}<figcaption>For a strip in the middle of the line.</figcaption></figure>`,
  );
  for (const kind of settings.observables) {
    const own = cases.filter((one) => one.observable === kind);
    if (settings.observables.length > 1) await sink.write(`<h3>${escaped(kind.name)}</h3>`);
    await sink.write(
      tableOf(
        own.flatMap((one) =>
          one.strips.map((strip) => [
            ...head(one),
            {head: "Strip <span>m</span>", text: metreText(strip.width)},
            {head: `Mean ± <span>${density}</span>`, text: figureText(delivery.toDensity(strip.middle))},
            {head: `Total ± <span>${total}</span>`, text: figureText(delivery.toDensity(strip.middle) * strip.width)},
            {head: `At the end ± <span>${density}</span>`, text: figureText(delivery.toDensity(strip.end))},
            {head: "With gradient <span>×</span>", text: share(strip.withGradient, strip.middle)},
            {head: "With second pass <span>×</span>", text: share(strip.withSecond, strip.middle)},
            ...(asked
              ? [
                  {
                    head: "Told up to <span>m</span>",
                    text: strip.highest === undefined ? "never" : metreText(strip.highest),
                  },
                ]
              : []),
          ]),
        ),
      ),
    );
  }
  await sink.write(
    `<h2>Resolution${settings.levels.length > 0 ? " and levels" : ""}</h2><figure>${resolutionFigure(plan)}</figure>`,
  );
  for (const kind of settings.observables) {
    if (settings.observables.length > 1) await sink.write(`<h3>${escaped(kind.name)}</h3>`);
    await sink.write(
      tableOf(
        cases
          .filter((one) => one.observable === kind)
          .map((one) => [
            ...head(one),
            {head: "Stations", text: exactText(one.stations)},
            {head: "Resolution <span>m</span>", text: figureText(one.resolution)},
            {head: "Degrees of freedom", text: figureText(one.degreesOfFreedom)},
            ...one.levels.map(({level, halfWidth}) => ({
              head: `Level ${metreText(level)} m ± <span>${field}</span>`,
              text: figureText(delivery.toField(halfWidth)),
            })),
          ]),
      ),
    );
  }
  await sink.write(
    `<h2>What the figures mean</h2>${planNotes(plan)
      .map((note) => `<p>${escaped(note)}</p>`)
      .join("")}`,
  );
  await sink.write(`<h2>Settings</h2>${definitionList(settingsOf(plan))}`);
  await sink.write(`<h2>Before anyone relies on this</h2>${cautionBox("lines")}${PAGE_END}`);
}

const noiseText = (value: number): string => exactText(Number(value.toPrecision(6)));

function tableOf(rows: readonly (readonly Cell[])[]): string {
  const row = (tag: "th" | "td", texts: readonly string[]): string =>
    `<tr>${texts.map((text) => `<${tag} class="n">${text}</${tag}>`).join("")}</tr>`;
  const heads = row(
    "th",
    rows[0]!.map((cell) => cell.head),
  );
  return `<table><thead>${heads}</thead><tbody>${rows
    .map((cells) =>
      row(
        "td",
        cells.map(({text}) => text),
      ),
    )
    .join("")}</tbody></table>`;
}

function settingsOf({settings}: Plan): readonly (readonly [string, string])[] {
  const {observables, clearances, spacings, noises, bounds, support, regional, direction} = settings;
  const delivery = deliveryOf(observables[0]!);
  return [
    ["Readings", observables.map(({name}) => escaped(name)).join(", ")],
    ["Clearance", `${list(clearances)} m`],
    ["Spacing", `${list(spacings)} m`],
    ["Noise", `${noises.map((noise) => noiseText(delivery.toReading(noise))).join(", ")} ${delivery.reading}`],
    ["Bound", bounds.map(({text}) => escaped(text)).join(", ")],
    ["Length of the line", `${metreText(settings.length)} m`],
    ["Boundary", `flat, ${metreText(settings.boundaryDepth)} m below the ground`],
    [
      "Support",
      support.length === 0
        ? "the line and five heights on either side"
        : support
            .map((zone) => ("area" in zone ? "" : `${metreText(zone.from)} to ${metreText(zone.to)} m`))
            .join("; "),
    ],
    ["Regional", regional < 0 ? "none" : `degree ${regional}, a channel its own`],
    ...(direction === undefined
      ? []
      : [
          [
            "Field along the line",
            `inclination ${figureText(direction.inclination)}°, share ${figureText(direction.beta)}`,
          ] as const,
        ]),
    ["Intervals", percentText(settings.confidence)],
  ];
}
