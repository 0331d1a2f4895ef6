/**
 * Ellipsoids as numbers, and what is measured on them.
 *
 * The names are PROJ's (its list of ellipsoids, PROJ 9.1). They are turned into numbers here
 * because proj4 silently takes WGS 84 for a name that it does not know, WGS72 among them.
 */

/** A figure of the Earth. */
export interface Ellipsoid {
  /** Metres. */
  readonly semiMajorAxis: number;
  /** 1/f; 0 for a sphere. */
  readonly inverseFlattening: number;
}

const withAxes = (a: number, b: number): Ellipsoid => ({
  semiMajorAxis: a,
  inverseFlattening: a === b ? 0 : a / (a - b),
});
const figure = (a: number, rf: number): Ellipsoid => ({semiMajorAxis: a, inverseFlattening: rf});

export const GRS80: Ellipsoid = figure(6378137, 298.257222101);
export const WGS84: Ellipsoid = figure(6378137, 298.257223563);

/** Ellipsoids by PROJ's name. */
export const ELLIPSOIDS: ReadonlyMap<string, Ellipsoid> = new Map([
  ["airy", figure(6377563.396, 299.3249646)],
  ["aust_SA", figure(6378160, 298.25)],
  ["bess_nam", figure(6377483.865, 299.1528128)],
  ["bessel", figure(6377397.155, 299.1528128)],
  ["clrk66", withAxes(6378206.4, 6356583.8)],
  ["clrk80", figure(6378249.145, 293.4663)],
  ["clrk80ign", figure(6378249.2, 293.4660212936269)],
  ["danish", figure(6377019.2563, 300)],
  ["evrst30", figure(6377276.345, 300.8017)],
  ["evrst48", figure(6377304.063, 300.8017)],
  ["evrst56", figure(6377301.243, 300.8017)],
  ["evrst69", figure(6377295.664, 300.8017)],
  ["evrstSS", figure(6377298.556, 300.8017)],
  ["fschr60m", figure(6378155, 298.3)],
  ["GRS67", figure(6378160, 298.247167427)],
  ["GRS80", GRS80],
  ["GSK2011", figure(6378136.5, 298.2564151)],
  ["helmert", figure(6378200, 298.3)],
  ["hough", figure(6378270, 297)],
  ["intl", figure(6378388, 297)],
  ["krass", figure(6378245, 298.3)],
  ["mod_airy", withAxes(6377340.189, 6356034.446)],
  ["plessis", withAxes(6376523, 6355863)],
  ["PZ90", figure(6378136, 298.25784)],
  ["sphere", withAxes(6370997, 6370997)],
  ["WGS66", figure(6378145, 298.25)],
  ["WGS72", figure(6378135, 298.26)],
  ["WGS84", WGS84],
]);

/** Flattening f = (a − b)/a. */
export const flattening = (ellipsoid: Ellipsoid): number =>
  ellipsoid.inverseFlattening === 0 ? 0 : 1 / ellipsoid.inverseFlattening;

/** Semi-minor axis, m. */
export const semiMinorAxis = (ellipsoid: Ellipsoid): number => ellipsoid.semiMajorAxis * (1 - flattening(ellipsoid));

/**
 * Radii of curvature at a latitude: along the meridian, M, and across it, N.
 * @param latitude degrees
 * @returns metres
 */
export function curvatureRadii(ellipsoid: Ellipsoid, latitude: number): {meridian: number; primeVertical: number} {
  const f = flattening(ellipsoid);
  const e2 = f * (2 - f);
  const s = Math.sin((latitude * Math.PI) / 180);
  const w2 = 1 - e2 * s * s;
  const primeVertical = ellipsoid.semiMajorAxis / Math.sqrt(w2);
  return {meridian: (primeVertical * (1 - e2)) / w2, primeVertical};
}

/** The figure in PROJ's words. */
export const ellipsoidWords = ({semiMajorAxis, inverseFlattening}: Ellipsoid): string =>
  inverseFlattening === 0 ? `+a=${semiMajorAxis} +b=${semiMajorAxis}` : `+a=${semiMajorAxis} +rf=${inverseFlattening}`;
