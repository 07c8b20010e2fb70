import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { exitCurve } from "../simulate/exit-curve.js";
import { untraceable } from "../simulate/trace.js";
import { type MixingBounds, mixingBounds, positionBetween } from "./bounds.js";
import { conditionsOf, type DutySettings } from "./conditions.js";
import { exitAge } from "./exit-age.js";
import { type Figure, figuresOf, meanFeed, speciesFigure } from "./figures.js";
import { noCurve, nothingReacts, type Premises, unknownPremises, unlikeBodies, warmPremises } from "./premises.js";
import { type SteadyState, steadyState } from "./steady.js";
import type { SteadyProgress } from "./walk.js";

/** What a vessel does at a duty, and what its exit-age curve alone would allow. */
export interface Prediction {
  readonly state: SteadyState;
  readonly figures: readonly Figure[];
  /** For figures of species over all outlets or at one; the order of `figures`. Undefined where there are none. */
  readonly bounds: readonly (FigureBounds | undefined)[];
  /** Whether the bounds bound, in plain words. Undefined where no bound was computed. */
  readonly premises: Premises | undefined;
}

export interface FigureBounds {
  readonly name: string;
  readonly segregated: Figure;
  readonly maximumMixedness: Figure;
  /** 0 at complete segregation, 1 at maximum mixedness; undefined where the two agree. */
  readonly position: number | undefined;
}

/** Nodes up to which the exit-age curve is computed for the bounds: finely, it takes many runs of the engine. */
const mostBounded = 5000;

/**
 * Steady state, figures and bounds of a duty in a plant compiled at the duty's flows (`networkSettings`).
 * @param settings values in place of the duty's (`DutySettings`)
 */
export function predict(
  plant: Plant,
  duty: Duty,
  settings: DutySettings = {},
  progress?: (solved: SteadyProgress) => void,
): Prediction {
  const { chemistry } = duty;
  const state = steadyState(plant, chemistry, duty, settings, progress);
  const figures = figuresOf(plant, duty, state, settings);
  if (!chemistry || chemistry.reactions.length === 0) {
    return { state, figures, bounds: figures.map(() => undefined), premises: undefined };
  }
  if (duty.heat) return { state, figures, bounds: figures.map(() => undefined), premises: warmPremises };
  if (plant.columns.size > mostBounded || untraceable(plant).length > 0) {
    return { state, figures, bounds: figures.map(() => undefined), premises: figures.length > 0 ? noCurve : undefined };
  }
  const conditions = conditionsOf(plant, chemistry, duty, settings);
  if (conditions.varied) return { state, figures, bounds: figures.map(() => undefined), premises: unlikeBodies };
  const known = new Map<string | undefined, MixingBounds | undefined>();
  const boundsAt = (outlet: string | undefined): MixingBounds | undefined => {
    if (!known.has(outlet)) known.set(outlet, mixingBounds(plant, conditions, exitAge(exitCurve(plant, outlet))));
    return known.get(outlet);
  };
  const fed = meanFeed(plant, state.fed);
  let asked = false;
  const bounds = duty.report.map((line, k): FigureBounds | undefined => {
    const isOutlet = line.at === undefined || plant.outlets.some((o) => o.name === line.at && o.flow > 0);
    if (line.what === "tracer-time" || line.what === "temperature" || line.what === "time-beyond" || !isOutlet) {
      return undefined;
    }
    asked = true;
    const found = boundsAt(line.at);
    if (!found) return undefined;
    const one = (out: Float64Array): Figure => speciesFigure(duty, state.species, line, { fed, out }, settings);
    const [segregated, maximumMixedness] = [one(found.segregated), one(found.maximumMixedness)];
    const position = positionBetween(segregated.value, figures[k].value, maximumMixedness.value);
    return { name: line.text, segregated, maximumMixedness, position };
  });
  const premises = [...known.values()].find((b) => b !== undefined)?.premises ?? (asked ? unknownPremises : undefined);
  if (premises === nothingReacts) return { state, figures, bounds: figures.map(() => undefined), premises };
  return { state, figures, bounds, premises };
}
