/** Numbers of the TIFF 6.0, BigTIFF and GeoTIFF 1.1 (OGC 19-008) formats and of GDAL's two tags. */

export const TAG = {
  newSubfileType: 254,
  imageWidth: 256,
  imageLength: 257,
  bitsPerSample: 258,
  compression: 259,
  photometric: 262,
  stripOffsets: 273,
  samplesPerPixel: 277,
  rowsPerStrip: 278,
  stripByteCounts: 279,
  planarConfiguration: 284,
  predictor: 317,
  tileWidth: 322,
  tileLength: 323,
  tileOffsets: 324,
  tileByteCounts: 325,
  extraSamples: 338,
  sampleFormat: 339,
  modelPixelScale: 33550,
  modelTiepoint: 33922,
  modelTransformation: 34264,
  geoKeyDirectory: 34735,
  geoDoubleParams: 34736,
  geoAsciiParams: 34737,
  gdalMetadata: 42112,
  gdalNodata: 42113,
} as const;

export const FIELD = {
  byte: 1,
  ascii: 2,
  short: 3,
  long: 4,
  double: 12,
  long8: 16,
} as const;

/** Bytes of one value by field type; index = type. */
export const FIELD_SIZE: readonly number[] = [0, 1, 1, 2, 4, 8, 1, 1, 2, 4, 8, 4, 8, 4, 0, 0, 8, 8, 8];

export const COMPRESSION = {
  none: 1,
  lzw: 5,
  deflate: 8,
  packbits: 32773,
  oldDeflate: 32946,
  zstd: 50000,
} as const;
