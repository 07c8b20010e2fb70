import { columnWidth } from "../../draw/picture.js";
import { profilesAlong } from "../../reaction/profile.js";
import type { Prediction } from "../../study/result.js";
import type { Figure } from "../input.js";
import { plotAlong } from "./along-figure.js";

/** For each duty the mixture along the tubes and dispersed bodies of the vessel, where it reacts and has such. */
export function alongFigures(predictions: readonly Prediction[]): Figure[] {
  const duties = [...new Map(predictions.map((p) => [p.duty, p])).values()];
  return duties.flatMap(({ duty, plant, steady }, k): Figure[] => {
    if (!duty.chemistry || !steady.converged) return [];
    const profiles = profilesAlong(plant, duty.chemistry, duty, steady);
    if (profiles.length === 0) return [];
    return [
      {
        name: `along-${k + 1}`,
        ...plotAlong(plant, duty, steady.species, profiles, { untitled: true, width: columnWidth, height: 150 }),
        caption: `${duty.title}: the mixture on its way through what it flows along; the right end is what leaves.`,
      },
    ];
  });
}
