/** What a product is made with: the files it writes, by name, from the caller, who closes them after `end`; and the run it tells of. */
import type {ByteSink, ScratchStore} from "../formats/byte-source.ts";
import type {Georeference} from "../formats/geotiff-read.ts";
import type {Settings} from "../study/settings.ts";
import type {TextSink} from "./product.ts";

export type OpenText = (fileName: string) => TextSink | Promise<TextSink>;
export type OpenBytes = (fileName: string) => ByteSink | Promise<ByteSink>;
/** Temporary space that the caller discards after `end`. */
export type OpenScratch = () => ScratchStore | Promise<ScratchStore>;

export interface Opening {
  readonly openText: OpenText;
  readonly openBytes: OpenBytes;
  readonly openScratch: OpenScratch;
}

export interface RunAbout {
  readonly version: string;
  readonly settings: Settings;
}

/** Where a grid lies and how it marks pixels without a value, as its file says it. */
export interface GridPlace {
  readonly georeference: Georeference;
  readonly nodataText: string | undefined;
}
