import { deadBody } from "../svg/bodies.js";
import type { CompartmentKind } from "./kind.js";

/** Volume that no stream reaches. Cholette & Cloutier, Can. J. Chem. Eng. 37 (1959) 105. */
export const dead: CompartmentKind = {
  name: "dead",
  says: "Volume that the flow never reaches: counted in the vessel, not in the balance.",
  keys: {
    volume: {
      shape: { is: "quantity", dimension: "volume" },
      required: true,
      says: "Liquid held and never renewed.",
      example: "100 L",
    },
  },
  flows: false,
  exchanges: false,
  mayExchange: () => false,
  volume: ({ values }) => values.volume,
  spell: () => undefined,
  picture: (box) => deadBody(box),
  aspect: () => 2,
};
