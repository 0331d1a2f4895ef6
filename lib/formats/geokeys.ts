/** The coordinate system of a GeoTIFF, from its key directory. Source: OGC 19-008, section 7 and annex B. */

/** The three key tags as they stand in the file, to be copied; empty where absent. */
export interface GeoKeyTags {
  readonly geoKeyDirectory: readonly number[];
  readonly geoDoubleParams: readonly number[];
  /** With the bars that end each text. */
  readonly geoAsciiParams: string;
}

export interface RasterCrs {
  readonly kind: "projected" | "geographic" | "unknown";
  /** Code of the projected system, else of the geographic one; absent when user-defined. */
  readonly epsg?: number;
  readonly citation?: string;
  /** EPSG code of the linear unit (9001 metre, 9002 foot, 9003 US survey foot), when given. */
  readonly linearUnit?: number;
  readonly pixelIsPoint: boolean;
}

const KEY = {
  modelType: 1024,
  rasterType: 1025,
  citation: 1026,
  geographicType: 2048,
  geographicCitation: 2049,
  projectedType: 3072,
  projectedCitation: 3073,
  linearUnit: 3076,
} as const;

const ASCII_TAG = 34737;

export function crsOf(tags: GeoKeyTags): RasterCrs {
  const numbers = new Map<number, number>();
  const texts = new Map<number, string>();
  const directory = tags.geoKeyDirectory;
  for (let i = 4; i + 3 < directory.length; i += 4) {
    const [key, location, count, value] = [directory[i]!, directory[i + 1]!, directory[i + 2]!, directory[i + 3]!];
    if (location === 0) numbers.set(key, value);
    else if (location === ASCII_TAG)
      texts.set(key, tags.geoAsciiParams.slice(value, value + count).replace(/[|\0]+$/, ""));
  }
  const model = numbers.get(KEY.modelType);
  const kind = model === 1 ? "projected" : model === 2 ? "geographic" : "unknown";
  const code = numbers.get(kind === "projected" ? KEY.projectedType : KEY.geographicType);
  // 0 is undefined, 32767 user-defined; codes above are private.
  const epsg = code !== undefined && code > 0 && code < 32767 ? {epsg: code} : {};
  const text = texts.get(KEY.projectedCitation) ?? texts.get(KEY.citation) ?? texts.get(KEY.geographicCitation);
  const citation = text ? {citation: text} : {};
  const unit = numbers.get(KEY.linearUnit);
  const linearUnit = unit === undefined ? {} : {linearUnit: unit};
  return {kind, ...epsg, ...citation, ...linearUnit, pixelIsPoint: numbers.get(KEY.rasterType) === 2};
}
