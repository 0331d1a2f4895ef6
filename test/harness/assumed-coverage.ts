/**
 * Coverage of intervals whose bound is assumed from the readings themselves. The walk of the program in pieces: modes
 * once for a model, then the rule, the resolution and the weights for every draw of noise.
 */
import {resolutionOf, stretchAt} from "../../lib/inverse/averages.ts";
import type {AffineEstimate} from "../../lib/inverse/intervals.ts";
import type {BoundChoice} from "../../lib/inverse/nouns.ts";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {type Functional, meanOver} from "../../lib/operators/functional.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten, whitenData} from "../../lib/operators/whitened.ts";
import type {Solver} from "../../lib/solvers/solver.ts";
import {energyOutside, evidenceOf, modalSums} from "../../lib/solvers/spectral.ts";
import {dataCoefficients, singularSystem} from "../../lib/spectral/singular-system.ts";
import type {KnownModel} from "./assumed-models.ts";
import {fineNodes, inner} from "./fine-continuum.ts";
import {intervalsOf, readAt} from "./interval-case.ts";

/** A way to assume a bound. */
export interface Assumption {
  readonly name: string;
  bound(solver: Solver, choice: BoundChoice, supportLength: number): number;
}

export interface Score {
  readonly model: string;
  readonly noise: number;
  readonly assumption: string;
  /** Shares of strips, averages and level values that were covered, over strips or points and draws. */
  readonly strips: number;
  readonly averages: number;
  readonly level: number;
  /** The worst of the strips and points. */
  readonly worstStrip: number;
  readonly worstAverage: number;
  readonly worstLevel: number;
  /** Median of the assumed bound over the norm of the true source. */
  readonly boundRatio: number;
  /** Median of the strips' half-widths over those of the true bound. */
  readonly widthRatio: number;
}

/** Weights are shared by bounds, and averages by multipliers, within these steps of ln. */
const BOUND_STEP = 0.02;
const MULTIPLIER_STEP = 0.1;
/** The bounds met here lie below this many times the true one. */
const LOOSEST = 1000;

interface Asked {
  readonly functional: Functional;
  readonly truth: number;
  readonly affine: Map<number, AffineEstimate>;
}

const midOf = (values: number[]): number => values.sort((a, b) => a - b)[values.length >> 1];

/** @param share noise over the largest reading */
export function assumedCoverage(
  model: KnownModel,
  share: number,
  assumptions: readonly Assumption[],
  draws: number,
  seed: number,
): readonly Score[] {
  const {x, z, degree} = model;
  const support = [model.support];
  const length = model.support.to - model.support.from;
  const clean = x.map((at, i) => model.field(at, z[i]));
  const noise = share * clean.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  const nodes = fineNodes(model.support.from, model.support.to, 0.5, model.breaks);
  const f = nodes.at.map(model.source);
  const norm = Math.sqrt(inner(nodes, f, f));
  const meanTruth = (from: number, to: number): number => {
    const own = fineNodes(from, to, 0.5, model.breaks);
    return own.at.reduce((sum, t, k) => sum + own.weight[k] * model.source(t), 0) / (to - from);
  };

  const readings = verticalReadings(x, z, noise);
  const basis = regionalBasis(readings, degree);
  const panels = panelsOn(support, model.panel);
  const system = whiten(forwardOperator(readings, panels), readings, clean, basis);
  const modes = singularSystem(system.matrix, system.rows, system.columns);
  const solverFor = (data: Float64Array): Solver => {
    const energies = dataCoefficients(modes, data).map((c) => c * c);
    const outside = energyOutside(data, energies);
    const unused = (): never => {
      throw new Error("not asked for here");
    };
    return {
      ...modalSums(modes.eigenvalues, energies, outside),
      data: system.rows,
      unknowns: modes.columns,
      modes: modes.count,
      evidence: evidenceOf(modes.eigenvalues, energies, outside, system.rows - basis.terms),
      estimate: unused,
      withNoise: unused,
    };
  };
  const intervals = intervalsOf({x, z, support, noise, bound: norm, degree, loosest: LOOSEST});
  const ask = (functional: Functional, truth: number): Asked => ({functional, truth, affine: new Map()});
  const affineAt = ({functional, affine}: Asked, bound: number): AffineEstimate => {
    const place = Math.min(Math.round(Math.log(bound / norm) / BOUND_STEP), Math.floor(Math.log(LOOSEST) / BOUND_STEP));
    const found = affine.get(place) ?? intervals.affine(functional, Math.exp(place * BOUND_STEP));
    affine.set(place, found);
    return found;
  };
  const strips = model.strips.map(([from, to]) => ask(meanOver({from, to}, support), meanTruth(from, to)));
  const level = Array.from(model.points, (at) => ask(readAt(at, model.height, support), model.field(at, model.height)));
  const averagesBy = new Map<number, readonly Asked[]>();
  const averagesAt = (multiplier: number): readonly Asked[] => {
    const place = multiplier === Infinity ? Infinity : Math.round(Math.log(multiplier) / MULTIPLIER_STEP);
    const found =
      averagesBy.get(place) ?? averagesFor(place === Infinity ? Infinity : Math.exp(place * MULTIPLIER_STEP));
    averagesBy.set(place, found);
    return found;
  };
  const averagesFor = (multiplier: number): readonly Asked[] => {
    const resolution = resolutionOf(intervals, panels, multiplier, x);
    return Array.from(model.points, (at) => {
      const stretch = stretchAt(panels, resolution, at)!;
      return ask(meanOver(stretch, support), meanTruth(stretch.from, stretch.to));
    });
  };

  const random = seededRandom(seed);
  const tallies = assumptions.map(() => ({
    strips: new Float64Array(strips.length),
    averages: new Float64Array(level.length),
    level: new Float64Array(level.length),
    bounds: [] as number[],
    widths: [] as number[],
  }));
  const values = new Float64Array(clean.length);
  for (let draw = 0; draw < draws; ++draw) {
    for (let i = 0; i < values.length; ++i) values[i] = clean[i] + noise * random.normal();
    const data = whitenData(values, readings, basis);
    const solver = solverFor(data);
    const choice = discrepancy.choose({solver, supportLength: length, lines: 1, largestNorm: solver.norm});
    const averages = averagesAt(choice.multiplier);
    assumptions.forEach((assumption, a) => {
      const bound = assumption.bound(solver, choice, length);
      const tally = tallies[a];
      const count = (asked: readonly Asked[], hits: Float64Array): void =>
        asked.forEach((each, k) => {
          const {weights, halfWidth} = affineAt(each, bound);
          let value = 0;
          for (let i = 0; i < weights.length; ++i) value += weights[i] * data[i];
          if (Math.abs(value - each.truth) <= halfWidth) hits[k] += 1 / draws;
        });
      count(strips, tally.strips);
      count(averages, tally.averages);
      count(level, tally.level);
      tally.bounds.push(bound / norm);
      tally.widths.push(...strips.map((each) => affineAt(each, bound).halfWidth / affineAt(each, norm).halfWidth));
    });
  }
  const mean = (shares: Float64Array): number => shares.reduce((sum, share) => sum + share / shares.length, 0);
  return tallies.map((tally, a) => ({
    model: model.name,
    noise: share,
    assumption: assumptions[a].name,
    strips: mean(tally.strips),
    averages: mean(tally.averages),
    level: mean(tally.level),
    worstStrip: Math.min(...tally.strips),
    worstAverage: Math.min(...tally.averages),
    worstLevel: Math.min(...tally.level),
    boundRatio: midOf(tally.bounds),
    widthRatio: midOf(tally.widths),
  }));
}
