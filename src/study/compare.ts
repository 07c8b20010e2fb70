import { compile } from "../compile/compile.js";
import type { Settings } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import type { ChangeDocument } from "../model/study.js";
import { networkSettings } from "../reaction/conditions.js";
import { type Figure, figuresOf } from "../reaction/figures.js";
import { steadyState } from "../reaction/steady.js";
import { applyChange } from "./change.js";
import { betterIs } from "./direction.js";
import type { RivalDraws } from "./draws-of.js";
import { sampledFigures } from "./predict.js";
import type { ChangedFigure, ChangeOutcome, Ranked } from "./result.js";
import { interval95 } from "./spread.js";

/**
 * A change on a ranked rival: every duty's figures before and after, with draws shared between the two, so that the
 * difference is known better than either.
 */
export function changeOutcomes(
  ranked: Ranked,
  change: ChangeDocument,
  duties: readonly Duty[],
  draws: RivalDraws,
  seed: number,
): ChangeOutcome {
  const { rival, fit } = ranked;
  const left = (skipped: string): ChangeOutcome => ({ change, rival, skipped, plant: undefined, figures: [] });
  const changed = applyChange(rival, change);
  if ("skipped" in changed) return left(changed.skipped);
  const keep = (settings: Settings): Settings =>
    Object.fromEntries(Object.entries(settings).filter(([name]) => !changed.sets.has(name)));
  const { plant, problems } = compile(changed.network, keep(fit?.values ?? {}));
  if (!plant) return left(problems[0]?.message ?? "the changed vessel does not balance");
  const after = draws.settings.map(keep);
  const figures = duties.flatMap((duty): ChangedFigure[] => {
    const old = figuresFor(rival.network, duty, fit?.values ?? {});
    const now = figuresFor(changed.network, duty, keep(fit?.values ?? {}));
    if (!old || !now) return [];
    const [was, is] = [
      sampledFigures(rival.network, duty, draws.settings, seed),
      sampledFigures(changed.network, duty, after, seed),
    ];
    return now.map((f, k): ChangedFigure => {
      const pairs = was.flatMap((w, i) => (w && is[i] ? [[w[k], (is[i] as number[])[k]] as const] : []));
      const differences = pairs.map(([a, b]) => b - a).filter(Number.isFinite);
      const sign = betterIs(duty, k);
      return {
        duty,
        name: f.name,
        unit: f.unit,
        before: old[k].value,
        value: f.value,
        interval95: interval95(pairs.map(([, b]) => b)),
        difference95: interval95(differences),
        probabilityBetter:
          sign === 0 || differences.length === 0
            ? undefined
            : differences.filter((d) => d * sign > 0).length / differences.length,
      };
    });
  });
  return { change, rival, skipped: undefined, plant, figures };
}

function figuresFor(network: Network, duty: Duty, settings: Settings): Figure[] | undefined {
  const { plant } = compile(network, { ...settings, ...networkSettings(duty) });
  return plant && figuresOf(plant, duty, steadyState(plant, duty.chemistry, duty));
}
