/**
 * The spectrum of the truncated Poisson operator
 *
 *   (P f)(x) = ∫_S P_h(x − t) f(t) dt,  P_h(s) = h / (π (h² + s²)),  S an interval,
 *
 * whose eigenvalues say how much of each mode of a source on S reaches height h.
 *
 * Legendre–Galerkin: in orthonormal Legendre polynomials p_n on S, the inner integral is
 * exact, ∫ P_h(x − t) P_n(t) dt = −(2/π) Im Q_n(x + ih), and the outer one a Gauss rule.
 * Even and odd modes do not mix and are solved apart. Eigenfunctions are analytic but for
 * singularities at ±a ± ih, so a basis of order √(a/h) + π/2 · (mode number) is enough,
 * where Nyström's method needs 20 a/h nodes.
 */
import {InputError, NumericalError} from "../errors.ts";
import {block} from "../numeric/block.ts";
import {secondKindImaginaryInto, secondKindWorkspace} from "../numeric/legendre-second-kind.ts";
import {gaussLegendre} from "../numeric/quadrature.ts";
import {symmetricEigen, symmetricEigenvalues} from "../numeric/symmetric-eigen.ts";
import {addProductTransposed} from "../numeric/tile-product.ts";
import {decayLaw, modeDecayRate, modesByLaw} from "./mode-decay.ts";

/** Largest Legendre basis, both parities together: two dense problems of half that order. */
const LARGEST_BASIS = 3200;
/** Eigenvalues must move less than this when the basis grows. */
const SETTLED = 1e-13;
/** Below this a computed eigenvalue is rounding, and the decay law, right to a few per cent, is closer. */
const ROUNDING_FLOOR = 1e-14;
/** Basis = 12 + MODE_SHARE · modes + NARROW / √(h/a): heuristics, checked by growing the basis every time. */
const MODE_SHARE = 1.7;
const NARROW = 9;
/** Rows of the matrix formed at once. */
const ROWS = 64;

export interface PoissonSpectrumRequest {
  /** Ends of the interval S, m. */
  readonly from: number;
  readonly to: number;
  /** Height h above it, m. */
  readonly height: number;
  /** How many eigenvalues, from the largest on. */
  readonly count: number;
}

export interface PoissonSpectrum {
  /** `count` eigenvalues in (0, 1), descending, absolute error below 1e-12. */
  readonly eigenvalues: Float64Array;
  /** Height over half-length. */
  readonly ratio: number;
  /** Legendre polynomials used, both parities together. */
  readonly basis: number;
  /** Largest change of an eigenvalue when the basis was last grown: the evidence for its accuracy. */
  readonly change: number;
  /** Eigenvalues from this one on are below 1e-14 and taken from the decay law. */
  readonly fromLaw: number;
}

export interface PoissonModes extends PoissonSpectrum {
  /**
   * count × basis row-major: row n holds the coefficients of the unit eigenfunction φ_n in the
   * orthonormal polynomials √((2k + 1)/(to − from)) P_k of the variable scaled to [−1, 1]; rows
   * from `fromLaw` on are zero.
   */
  readonly coefficients: Float64Array;
}

/**
 * The largest `count` eigenvalues.
 *
 * @throws {InputError} `spectral/bad-request` for a height ≤ 0, an empty interval or a count that is
 *   not a whole number ≥ 1
 * @throws {NumericalError} `spectral/basis-too-large` if the count or a very low height asks for more
 *   than 3200 polynomials; `spectral/not-settled` if eigenvalues still move
 */
export function poissonSpectrum(request: PoissonSpectrumRequest): PoissonSpectrum {
  return settle(request);
}

/** As `poissonSpectrum`, with the eigenfunctions; about three times the cost. */
export function poissonModes(request: PoissonSpectrumRequest): PoissonModes {
  const spectrum = settle(request);
  const {ratio, basis, fromLaw} = spectrum;
  const {count} = request;
  const coefficients = new Float64Array(count * basis);
  const quadrature = quadratureFor(ratio, basis);
  for (const parity of [0, 1] as const) {
    const size = sizeOf(basis, parity);
    const {vectors} = symmetricEigen(parityMatrix(ratio, size, parity, quadrature), size);
    for (let n = parity; n < fromLaw; n += 2) {
      for (let k = 0; k < size; ++k) coefficients[n * basis + 2 * k + parity] = vectors[((n - parity) / 2) * size + k];
    }
  }
  return {...spectrum, coefficients};
}

function settle(request: PoissonSpectrumRequest): PoissonSpectrum {
  const {from, to, height, count} = request;
  const ratio = checkedRatio(from, to, height);
  if (!(Number.isInteger(count) && count > 0)) {
    throw new InputError(
      "spectral/bad-request",
      `A spectrum of ${count} eigenvalues was asked; the count must be a whole number of at least 1.`,
    );
  }
  const rate = modeDecayRate(ratio);
  const fromLaw = Math.min(count, modesByLaw(rate, ROUNDING_FLOOR));
  let basis = basisFor(ratio, fromLaw);
  if (basis > LARGEST_BASIS) {
    throw new NumericalError(
      "spectral/basis-too-large",
      `${count} eigenvalues at height ${height} m over ${to - from} m (height over half-length ${ratio}) need about ${basis} Legendre polynomials, more than ${LARGEST_BASIS}. Ask for fewer eigenvalues, a shorter interval or a greater height.`,
    );
  }
  let values = solve(ratio, basis, fromLaw);
  let change = Number.POSITIVE_INFINITY;
  while (basis < LARGEST_BASIS) {
    basis = Math.min(LARGEST_BASIS, Math.ceil(basis * 1.15) + 4);
    const grown = solve(ratio, basis, fromLaw);
    change = 0;
    for (let n = 0; n < fromLaw; ++n) change = Math.max(change, Math.abs(grown[n] - values[n]));
    values = grown;
    if (change <= SETTLED) {
      const eigenvalues = new Float64Array(count);
      for (let n = 0; n < count; ++n) {
        eigenvalues[n] = n < fromLaw ? values[n] : Math.min(decayLaw(n, rate), n > 0 ? eigenvalues[n - 1] : 1);
      }
      return {eigenvalues, ratio, basis, change, fromLaw};
    }
  }
  throw new NumericalError(
    "spectral/not-settled",
    `The first ${count} eigenvalues at height over half-length ${ratio} still moved by ${change} with ${basis} Legendre polynomials; ${SETTLED} is needed. Ask for fewer eigenvalues or a greater height.`,
  );
}

/**
 * The number of modes with eigenvalue above `floor`.
 *
 * The law floor(ln(1/τ)/R − ½) + 1 gives it first: a numerical finding, not a theorem. Where a
 * spectrum can resolve the floor (≥ 1e-12) within 3200 polynomials it is then counted; if the two
 * agree, two independent ways have said the same, and if not, the count in a spectrum verified by a
 * larger basis decides. Beyond 3200 polynomials the law alone answers; it may be off by one where
 * an eigenvalue lies within a factor 1 ± 0.2/n of the floor.
 *
 * @param floor absolute, in (0, 1)
 * @throws {InputError} `spectral/bad-request` as `poissonSpectrum`, and unless 0 < floor < 1
 * @throws {NumericalError} `spectral/not-settled` as `poissonSpectrum`
 */
export function countUsableModes(
  interval: {readonly from: number; readonly to: number},
  height: number,
  floor: number,
): number {
  const {from, to} = interval;
  const ratio = checkedRatio(from, to, height);
  if (!(floor > 0 && floor < 1)) {
    throw new InputError(
      "spectral/bad-request",
      `The floor for usable modes is ${floor}; it must lie between 0 and 1.`,
    );
  }
  const byLaw = modesByLaw(modeDecayRate(ratio), floor);
  let count = byLaw + 4;
  if (!(floor >= 1e-12) || basisFor(ratio, count) > LARGEST_BASIS) return byLaw;
  if (usableModes(solve(ratio, basisFor(ratio, count), count), floor) === byLaw) return byLaw;
  for (;;) {
    const {eigenvalues} = poissonSpectrum({from, to, height, count});
    if (!(eigenvalues[count - 1] > floor)) return usableModes(eigenvalues, floor);
    count *= 2;
  }
}

/** How many of the eigenvalues (descending) lie above `floor`. */
export function usableModes(eigenvalues: Float64Array, floor: number): number {
  let n = 0;
  while (n < eigenvalues.length && eigenvalues[n] > floor) ++n;
  return n;
}

function checkedRatio(from: number, to: number, height: number): number {
  if (!(height > 0 && height < Infinity)) {
    throw new InputError("spectral/bad-request", `The height is ${height} m; a spectrum needs it finite and above 0.`);
  }
  const length = to - from;
  if (!(length > 0 && length < Infinity)) {
    throw new InputError(
      "spectral/bad-request",
      `The interval runs from ${from} m to ${to} m; its end must lie beyond its start.`,
    );
  }
  return (2 * height) / length;
}

const basisFor = (ratio: number, modes: number): number =>
  Math.ceil(12 + MODE_SHARE * modes + NARROW / Math.sqrt(ratio));

const sizeOf = (basis: number, parity: 0 | 1): number => (parity === 0 ? (basis + 1) >> 1 : basis >> 1);

/** Largest `modes` eigenvalues from a basis of that size, descending. */
function solve(ratio: number, basis: number, modes: number): Float64Array {
  const quadrature = quadratureFor(ratio, basis);
  const values = new Float64Array(modes);
  for (const parity of [0, 1] as const) {
    const size = sizeOf(basis, parity);
    const half = symmetricEigenvalues(parityMatrix(ratio, size, parity, quadrature), size);
    for (let n = parity; n < modes; n += 2) values[n] = half[(n - parity) / 2];
  }
  return values;
}

/** Positive half of a Gauss rule with an even number of nodes, fine enough for p_m times the inner integral. */
function quadratureFor(ratio: number, basis: number): {nodes: Float64Array; weights: Float64Array} {
  const half = Math.ceil((basis + 20 / Math.min(1, Math.sqrt(ratio)) + 20) / 2);
  const {nodes, weights} = gaussLegendre(2 * half);
  return {nodes: nodes.slice(half), weights: weights.slice(half)};
}

/** Entries (p_m, P p_n) for the m, n of one parity; size × size, lower triangle. */
function parityMatrix(
  ratio: number,
  size: number,
  parity: 0 | 1,
  {nodes, weights}: {nodes: Float64Array; weights: Float64Array},
): Float64Array {
  const points = nodes.length;
  const left = new Float64Array(size * points);
  const right = new Float64Array(size * points);
  const top = 2 * (size - 1) + parity + 1;
  const row = new Float64Array(top);
  const workspace = secondKindWorkspace(top);
  for (let q = 0; q < points; ++q) {
    const x = nodes[q];
    secondKindImaginaryInto(row, 0, x, ratio, top, workspace);
    let previous = 0;
    let value = 1;
    for (let k = 0; k < top; ++k) {
      if (k % 2 === parity) {
        const at = ((k - parity) / 2) * points + q;
        // The weight counts twice, for x and −x, which undoes the ½ of (2k + 1)/2.
        left[at] = (2 * k + 1) * weights[q] * value;
        right[at] = (-2 / Math.PI) * row[k];
      }
      const next = ((2 * k + 1) * x * value - k * previous) / (k + 1);
      previous = value;
      value = next;
    }
  }
  const a = new Float64Array(size * size);
  // The exact matrix is symmetric and the eigensolver reads the lower triangle: no more is formed.
  for (let m = 0; m < size; m += ROWS) {
    const end = Math.min(size, m + ROWS);
    addProductTransposed(
      block(a, m * size, size),
      block(left, m * points, points),
      block(right, 0, points),
      end - m,
      points,
      end,
      1,
    );
  }
  // The left factor carries (2m + 1); the symmetric form wants √((2m + 1)(2n + 1)).
  for (let m = 0; m < size; ++m) {
    for (let n = 0; n <= m; ++n) a[m * size + n] *= Math.sqrt((4 * n + 2 * parity + 1) / (4 * m + 2 * parity + 1));
  }
  return a;
}
