import type { Compared, Contrasted } from "../../data/across-trials.js";
import type { Known } from "../../data/figure.js";
import type { Across } from "../../study/across.js";
import type { Unit } from "../../units/unit.js";
import { finite, quantity } from "./quantity.js";

/** The trials of a vessel held against one another. Shares of what has left are fractions, ages half times. */
export function acrossJson({ contrasts, left, findings, notSupported }: Across, volume: Unit): object {
  return {
    contrasts: contrasts.map((c) => contrastJson(c, volume)),
    left: left.map(({ trial, at, why }) => ({ trial: trial.title, at, why })),
    findings,
    notSupported,
  };
}

const contrastJson = ({ pairs, ...c }: Contrasted, volume: Unit): object => ({
  ...c,
  pairs: pairs.map((p) => pairJson(p, volume)),
});

function pairJson(p: Compared, volume: Unit): object {
  const known = ({ value, sd }: Known): object => ({
    ...quantity(value, volume),
    standardError: sd === undefined ? null : finite(sd / volume.factor),
  });
  return {
    trials: p.trials.map((t) => t.title),
    differs: p.differs,
    flowRatio: p.flowRatio === undefined ? null : finite(p.flowRatio),
    apart: { value: finite(p.apart.value), age: finite(p.apart.age), standardError: finite(p.apart.error) },
    atMost95: finite(p.atMost),
    relativeVariance: p.relative.map(finite),
    relativeVarianceError: finite(p.relativeError),
    flowTimesMean: p.volumes?.map(known) ?? null,
  };
}
