import { tubularBody } from "../svg/bodies.js";
import type { CompartmentKind, Ports } from "./kind.js";

/** Ideal plug flow: a true transport delay V/Q, never smeared. Danckwerts, Chem. Eng. Sci. 2 (1953) 1-13. */
export const tubular: CompartmentKind = {
  name: "tubular",
  says: "Ideal plug flow: everything that enters leaves unchanged in shape one space time later.",
  keys: {
    volume: {
      shape: { is: "quantity", dimension: "volume" },
      required: true,
      says: "Liquid held.",
      example: "150 L",
    },
  },
  flows: true,
  exchanges: false,
  mayExchange: () => false,
  volume: ({ values }) => values.volume,
  spell(maker, { values }): Ports {
    const node = values.volume > 0 ? maker.delay(values.volume) : maker.joint();
    return { entry: node, exit: node, members: [] };
  },
  picture: (box) => tubularBody(box),
  aspect: () => 4,
};
