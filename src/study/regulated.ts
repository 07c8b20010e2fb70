import { regulatedFigures } from "../reaction/regulated.js";
import { plantOf } from "./operate.js";
import type { Ranked, RegulatedOutcome } from "./result.js";
import type { Sample } from "./sample.js";
import { quantile } from "./spread.js";

const fewest = 20;

/** @returns nothing where the duty declares nothing */
export function regulatedOutcome({ rival }: Ranked, { operation, rows }: Sample): RegulatedOutcome[] {
  const { regulated } = operation.duty;
  const { plant } = plantOf(operation);
  if (!regulated || !plant) return [];
  const figures = regulatedFigures(plant, regulated);
  const drawn = rows
    .map((row) => plantOf(operation, row).plant)
    .flatMap((p) => (p ? [regulatedFigures(p, regulated).t10] : []))
    .filter(Number.isFinite)
    .sort((a, b) => a - b);
  const lower = drawn.length < fewest ? undefined : quantile(drawn, 0.05);
  return [{ rival, duty: operation.duty, figures, lower }];
}
