import type { Plant } from "../compile/plant.js";
import type { Regulated } from "../model/duty.js";
import { exitTime } from "../simulate/exit-curve.js";
import { untraceable } from "../simulate/trace.js";

/** Figures of a regulator's contact-time method. SI; NaN where they cannot be worked out. */
export interface RegulatedFigures {
  readonly outlet: string;
  /** All that the vessel holds, m3, and all that is fed, m3/s. */
  readonly volume: number;
  readonly flow: number;
  /** volume / flow, s. */
  readonly detention: number;
  /** s */
  readonly t10: number;
  /** Where t10 is from. */
  readonly from: "network" | "baffling-factor";
  readonly bafflingFactor: number;
  /** kg/m3 */
  readonly residual: number | undefined;
  /** residual x t10, kg s/m3. */
  readonly ct: number | undefined;
  readonly credits: readonly Credit[];
}

/** What the declared entry of a table gives for the contact time. */
export interface Credit {
  readonly name: string;
  /** Decades of the entry and its contact time. */
  readonly log: number;
  readonly asked: number;
  /** ct / asked. */
  readonly ratio: number;
  /** Decades in proportion: ratio x log. */
  readonly credit: number;
}

/**
 * t10, baffling factor t10 / (V/Q), CT = residual x t10, and credit in proportion to declared entries of the regulator's own table.
 * It is no prediction of what is killed: that has kinetics and the whole curve.
 * @param plant at the flow of the duty
 * @see US EPA, Disinfection Profiling and Benchmarking Technical Guidance Manual, EPA 815-R-20-003 (2020) for the method
 */
export function regulatedFigures(plant: Plant, regulated: Regulated): RegulatedFigures {
  const volume = plant.volume.total;
  const flow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const detention = volume / flow;
  const assigned = regulated.bafflingFactor?.of([]);
  const own = (): number => (untraceable(plant).length > 0 ? Number.NaN : exitTime(plant, regulated.outlet, 0.1));
  const t10 = assigned === undefined ? own() : assigned * detention;
  const residual = regulated.residual?.of([]);
  const ct = residual === undefined ? undefined : residual * t10;
  return {
    outlet: regulated.outlet,
    volume,
    flow,
    detention,
    t10,
    from: assigned === undefined ? "network" : "baffling-factor",
    bafflingFactor: t10 / detention,
    residual,
    ct,
    credits:
      ct === undefined
        ? []
        : regulated.inactivation.map(({ name, log, ct: asked }) => {
            const ratio = ct / asked.of([]);
            return { name, log: log.of([]), asked: asked.of([]), ratio, credit: ratio * log.of([]) };
          }),
  };
}
