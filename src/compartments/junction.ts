import { junctionBody } from "../svg/bodies.js";
import type { CompartmentKind, Ports } from "./kind.js";

/** A point without volume where streams meet and split. */
export const junction: CompartmentKind = {
  name: "junction",
  says: "A point without volume where streams meet and split.",
  keys: {},
  flows: true,
  exchanges: false,
  sends: true,
  mayExchange: () => false,
  volume: () => 0,
  spell(maker): Ports {
    const node = maker.joint();
    return { entry: node, exit: node, members: [] };
  },
  picture: (box) => junctionBody(box),
  aspect: () => 1,
};
