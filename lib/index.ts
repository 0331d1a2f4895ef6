/** The public names, in the order of the walk: what goes wrong, readings, what is assumed, study, answers, products. */

export {openSurvey} from "./acquisition/catalogue.ts";
export type {AcquisitionSettings, ChannelSettings} from "./acquisition/settings.ts";
export {type ErrorCode, InputError, ModelError, NumericalError, type Place, ReportableError} from "./errors.ts";

export type {ByteSink, ByteSource, ScratchStore} from "./formats/byte-source.ts";
export {readGeoJson} from "./formats/geojson.ts";
export {areaOf, type MapArea} from "./geometry/map-area.ts";
export {BOUND_RULES, boundRuleNamed} from "./inverse/rules/catalogue.ts";
export type {Notice} from "./notice.ts";
export {OBSERVABLES, observableNamed} from "./potential/catalogue.ts";
export {LEVEL_QUANTITIES, type LevelQuantity, levelQuantityNamed} from "./potential/level-quantity.ts";
export type {Observable} from "./potential/observable.ts";
export {gridProducts, lineProducts} from "./products/catalogue.ts";
export {recordJson} from "./products/record.ts";
export {DELIVERY_UNIT, UNITS, type Unit} from "./quantities.ts";
export {CAUTIONS} from "./report/cautions.ts";
export {INTERVAL_BASIS} from "./report/interval-basis.ts";
export {countUsableModes, poissonSpectrum} from "./spectral/poisson-spectrum.ts";
export {studyGrid} from "./study/grid-study.ts";
export {studyLine} from "./study/line-study.ts";
export {type AcrossLines, neighbouringStrips} from "./study/neighbouring-strips.ts";
export type {LineOutcome, LineStudy, RowOutcome, RowStudy} from "./study/outcome.ts";
export {type Plan, type PlanCase, type PlannedStrip, planSurvey} from "./study/plan.ts";
export type {PlanSettings} from "./study/planned-work.ts";
export type {Settings} from "./study/settings.ts";
export {studySurvey} from "./study/survey-study.ts";
export {type Inspection, inspectSurvey} from "./survey/inspection.ts";
export type {Channel, Stations, SurveyLine} from "./survey/line.ts";
export {NOT_CORRECTED} from "./survey/not-corrected.ts";
export type {Axis, LineRecord, Survey} from "./survey/survey.ts";
