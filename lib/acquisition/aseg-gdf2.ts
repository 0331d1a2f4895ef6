/**
 * Survey lines from ASEG-GDF2 pairs: fields take roles as the columns of a table do, and the
 * definition's units are believed: one that contradicts the settings or the role stops the work.
 */
import {type Gdf2Table, openGdf2} from "../formats/aseg-gdf2-read.ts";
import type {ByteSource} from "../formats/byte-source.ts";
import {type Notice, remark} from "../notice.ts";
import type {Survey} from "../survey/survey.ts";
import {channelPlans} from "./channel-plan.ts";
import {openTableSurvey, planColumns} from "./delimited.ts";
import {gdf2Pairs} from "./gdf2-pairs.ts";
import type {AcquisitionSettings} from "./settings.ts";
import {placeUnit, readingUnit, type UnitOfDefinition} from "./unit-of-definition.ts";

/** Characters of a description that are shown. */
const WORDS_SHOWN = 300;

/**
 * @param files definitions and, under the same names, their data (.dat), description (.des) and projection (.prj)
 * @throws {InputError} `gdf2/…` for a pair that does not fit together, `unit/conflict`, `unit/not-understood`,
 *   `unit/wrong-dimension`, `unit/files-differ`, `unit/not-metres`, `unit/not-degrees`, and those of tables
 */
export async function openAsegSurvey(files: readonly ByteSource[], settings: AcquisitionSettings): Promise<Survey> {
  channelPlans(settings.channels);
  const tables: Gdf2Table[] = [];
  const notices: Notice[] = [];
  /** Role of a channel → the unit that the definitions give. */
  const units = new Map<string, UnitOfDefinition>();
  let needed: ReadonlySet<string> | undefined;
  for (const pair of gdf2Pairs(files)) {
    const table = await openGdf2(pair);
    tables.push(table);
    notices.push(...documentNotices(table, settings));
    const {choices} = await planColumns(table, settings, channelPlans(settings.channels, settings.noiseLength), needed);
    needed ??= new Set(choices.map(({role}) => role));
    for (const choice of choices) {
      const channel = settings.channels.find(({role}) => role === choice.role);
      const place = {file: table.definition, column: choice.column};
      const defined = table.units[choice.index];
      if (channel === undefined) notices.push(...placeUnit(choice, defined, settings, place));
      else notices.push(...readingUnit(channel, defined, units, place));
    }
  }
  const known = settings.channels.map((channel) => ({
    ...channel,
    unit: channel.unit ?? units.get(channel.role)?.symbol,
  }));
  const survey = await openTableSurvey(tables, {...settings, channels: known});
  return {
    ...survey,
    choices: survey.choices.map((choice) => {
      const unit = units.get(choice.role);
      return unit === undefined ? choice : {...choice, unit: unit.symbol};
    }),
    notices: [...notices, ...survey.notices],
  };
}

/** What stands beside the numbers, told so that it is not lost. */
function documentNotices({name, definition, projection, description}: Gdf2Table, {crs}: AcquisitionSettings): Notice[] {
  const notices: Notice[] = [];
  if (projection.length > 0) {
    const words = projection.map((entry) => `${entry.name} ${entry.value}`).join(", ");
    const cure =
      crs === undefined
        ? "It is not taken from there: give it with --crs EPSG:n."
        : `Check that this is the system given, ${crs}.`;
    notices.push(
      remark("gdf2/projection", `${definition} tells of the coordinate system: ${shortened(words)}. ${cure}`, {
        file: definition,
      }),
    );
  }
  if (description !== "")
    notices.push(
      remark("gdf2/description", `What is told of ${name}: ${shortened(description.replaceAll(/\s+/g, " "))}`, {
        file: name,
      }),
    );
  return notices;
}

/** A message stays a message, whatever stands in the file. */
const shortened = (text: string): string => (text.length > WORDS_SHOWN ? `${text.slice(0, WORDS_SHOWN)}…` : text);
