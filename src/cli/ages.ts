import type { Plant } from "../compile/plant.js";
import { meanAges, meanLives } from "../simulate/ages.js";
import { inUnit, type Unit } from "../units/unit.js";
import { columnsCsv } from "./csv.js";

/** Mean age of what leaves every node and the mean time it has yet to stay, cells of tables included, as CSV. */
export function agesCsv(plant: Plant, time: Unit): string {
  const [ages, lives] = [meanAges(plant), meanLives(plant)];
  const header = ["leaving", `mean age [${time.name}]`, `left to stay on entering [${time.name}]`];
  const { size, nameOf } = plant.columns;
  return columnsCsv(
    header,
    size,
    (i) => nameOf(i),
    (i, column) => inUnit((column === 0 ? ages : lives)[i], time),
  );
}
