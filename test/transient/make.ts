import type { Plant } from "../../src/compile/plant.js";
import { plantOf } from "../reaction/make.js";

/** A tube of 2 m3, then a tank of 2 m3, at 1 m3/s. */
export const tubeRow = (): Plant =>
  plantOf({
    tubes: { tube: 2 },
    cells: { tank: 2 },
    links: [
      ["feed", "tube", 1],
      ["tube", "tank", 1],
      ["tank", "out", 1],
    ],
  });
