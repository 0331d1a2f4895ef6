/** Where the pixels of an axis-aligned grid lie. */
import {InputError} from "../errors.ts";
import {doubt, type Notice} from "../notice.ts";

/**
 * Map position of pixel corners: x = x0 + column · dxCol, y = y0 + row · dyRow, in map
 * units; (x0, y0) is the outer corner of the first pixel, so that its centre is half a
 * pixel on. dyRow is negative where the first row is the northernmost.
 */
export interface Affine {
  readonly x0: number;
  readonly y0: number;
  readonly dxCol: number;
  readonly dyRow: number;
}

export const pixelCentreX = (affine: Affine, column: number): number => affine.x0 + (column + 0.5) * affine.dxCol;
export const pixelCentreY = (affine: Affine, row: number): number => affine.y0 + (row + 0.5) * affine.dyRow;

/** The georeferencing tags as they stand in the file; empty where absent. */
export interface ModelTags {
  readonly modelPixelScale: readonly number[];
  readonly modelTiepoint: readonly number[];
  readonly modelTransformation: readonly number[];
}

/** A rotation below this part of a pixel over the whole grid moves no pixel visibly. Heuristic. */
const ROTATION_TOLERANCE = 1e-3;

/**
 * The grid's position from tag 34264 (ModelTransformation), else 33550 and 33922
 * (ModelPixelScale, ModelTiepoint). With `pixelIsPoint` the tags give the centre of a
 * pixel, and half a pixel is taken off. Source: OGC 19-008, section 7.
 *
 * @throws {InputError} `raster/no-georeference`, `raster/rotated`
 */
export function affineOf(
  tags: ModelTags,
  pixelIsPoint: boolean,
  size: {readonly width: number; readonly height: number},
  file: string,
): {readonly affine: Affine; readonly notices: readonly Notice[]} {
  const notices: Notice[] = [];
  let [dxCol, xRow, x0, yCol, dyRow, y0] = [0, 0, 0, 0, 0, 0];
  const matrix = tags.modelTransformation;
  const scale = tags.modelPixelScale;
  const tie = tags.modelTiepoint;
  if (matrix.length >= 16)
    [dxCol, xRow, x0, yCol, dyRow, y0] = [matrix[0]!, matrix[1]!, matrix[3]!, matrix[4]!, matrix[5]!, matrix[7]!];
  else if (scale.length >= 2 && tie.length >= 6) {
    dxCol = scale[0]!;
    dyRow = -Math.abs(scale[1]!);
    x0 = tie[3]! - tie[0]! * dxCol;
    y0 = tie[4]! - tie[1]! * dyRow;
    if (scale[1]! < 0)
      notices.push(
        doubt(
          "raster/negative-scale",
          `${file} gives a negative pixel height, which programs read in two ways; the first row is taken as the northernmost. Compare a known point, or write the grid again with gdal_translate.`,
          {file},
        ),
      );
  } else {
    const reason =
      tie.length > 6
        ? `only ${tie.length / 6} control points, which do not define a regular grid`
        : "no position (neither ModelTransformation nor ModelPixelScale with ModelTiepoint)";
    throw new InputError(
      "raster/no-georeference",
      `${file} has ${reason}; the map position of its pixels was needed. Add it with gdal_edit.py -a_ullr, or warp the grid with gdalwarp.`,
      {place: {file}},
    );
  }
  if (![x0, y0, dxCol, dyRow, xRow, yCol].every(Number.isFinite) || dxCol === 0 || dyRow === 0) {
    const turned = xRow !== 0 && yCol !== 0;
    if (!turned)
      throw new InputError(
        "raster/no-georeference",
        `${file} gives its pixels the size ${dxCol} by ${dyRow}; finite sizes other than zero were needed. Correct them with gdal_edit.py -a_ullr.`,
        {place: {file}},
      );
  }
  const skewX = Math.abs(xRow) * size.height;
  const skewY = Math.abs(yCol) * size.width;
  if (!(skewX <= ROTATION_TOLERANCE * Math.abs(dxCol) && skewY <= ROTATION_TOLERANCE * Math.abs(dyRow)))
    throw new InputError(
      "raster/rotated",
      `${file} is rotated or sheared against its map axes (a column step moves ${yCol} in y, a row step ${xRow} in x); rows along x and columns along y were needed. Bring it onto the axes with gdalwarp.`,
      {place: {file}},
    );
  if (pixelIsPoint) {
    x0 -= 0.5 * dxCol;
    y0 -= 0.5 * dyRow;
  }
  return {affine: {x0, y0, dxCol, dyRow}, notices};
}
