/** levels.dfn and levels.dat: the rows of levels.csv as an ASEG-GDF2 pair, number for number. */
import {type Gdf2Writer, gdf2Writer, type WrittenField} from "../formats/aseg-gdf2-write.ts";
import type {ByteSink} from "../formats/byte-source.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {intervalNoun} from "../report/interval-words.ts";
import {percentText} from "../report/number-text.ts";
import type {Opening} from "./opening.ts";
import type {LineProduct, RunFrame} from "./product.ts";

export async function levelsGdf2({openBytes, openScratch}: Opening): Promise<LineProduct> {
  const definition: ByteSink = await openBytes("levels.dfn");
  const data: ByteSink = await openBytes("levels.dat");
  const scratch = await openScratch();
  let delivery: Delivery;
  let writer: Gdf2Writer;
  return {
    begin: async (frame) => {
      delivery = deliveryOf(frame.observable, frame.quantity);
      writer = gdf2Writer(fieldsFor(frame, delivery), scratch);
    },
    line: async (outcome) => {
      if (!("study" in outcome)) return;
      const {line, levels, choice} = outcome.study;
      const {stations} = line;
      const field = (si: number | undefined): number => delivery.toLevel(si!);
      for (const level of levels)
        for (let i = 0; i < stations.count; ++i)
          await writer.row([
            outcome.id,
            stations.row[i],
            stations.chainage[i],
            stations.x?.[i],
            stations.y?.[i],
            level.height[i],
            field(level.value[i]),
            field(level.lower[i]),
            field(level.upper[i]),
            level.averagedOver[i],
            choice.basis,
          ]);
    },
    end: () => writer.finish({definition, data}),
  };
}

/** The columns of levels.csv, with what their names there do not say. */
function fieldsFor({survey, confidence, intervals}: RunFrame, {field}: Delivery): readonly WrittenField[] {
  const percent = percentText(confidence).replaceAll(/\s/g, " ");
  const where = survey.delivered ?? "coordinates of the data";
  return [
    {name: "LINE", kind: "text", longName: "Line"},
    {name: "ROW", kind: "number", longName: "Row of the file that was read"},
    {name: "CHAINAGE", kind: "number", unit: "m", longName: "Chainage"},
    {name: "X", kind: "number", longName: `x in ${where}`},
    {name: "Y", kind: "number", longName: `y in ${where}`},
    {name: "LEVEL", kind: "number", unit: "m", longName: "Height of the level above the boundary"},
    {name: "FIELD", kind: "number", unit: field, longName: "Field on the level"},
    {name: "LOWER", kind: "number", unit: field, longName: `Lower end of the ${percent} ${intervalNoun(intervals)}`},
    {name: "UPPER", kind: "number", unit: field, longName: `Upper end of the ${percent} ${intervalNoun(intervals)}`},
    {name: "AVERAGED_OVER", kind: "number", unit: "m", longName: "Length that the field is averaged over"},
    {name: "INTERVAL_BASIS", kind: "text", longName: "What the interval rests on"},
  ];
}
