import { junctionBody } from "../svg/bodies.js";
import type { CompartmentKind } from "./kind.js";

/**
 * What stands for a body of which nothing is known but its name and where its streams go, since what else the file says of
 * it is wrong and was reported: checks of the rest go on around it. Never compiled.
 */
export const unknownKind: CompartmentKind = {
  name: "unknown",
  says: "",
  keys: {},
  flows: true,
  exchanges: true,
  mayExchange: () => true,
  volume: () => Number.NaN,
  spell: () => undefined,
  picture: (box) => junctionBody(box),
  aspect: () => 1,
};
