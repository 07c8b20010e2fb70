import { junctionBody } from "../svg/bodies.js";
import type { CompartmentKind } from "./kind.js";

/** Another network placed here. It is resolved into bodies of its own, so that no engine ever meets one. */
export const part: CompartmentKind = {
  name: "part",
  says: "Another network placed here. Its feeds and outlets are its ports: streams enter by `name.feed`, or by `name` where it has one feed, and what they bring replaces the flow of that feed. Its bodies, parameters and constants are reached by dots, as `name.bulk`, `name.tanks`.",
  keys: {
    use: {
      shape: { is: "text" },
      required: true,
      says: "The network file, relative to this file. It is a network that stands alone, or a variant of one.",
      example: "../shared/parts/quiet-corner.yaml",
    },
    with: {
      shape: { is: "named", each: { is: "quantity", dimension: "any" }, keys: "dotted" },
      says: "Values for constants and parameters of the part: numbers, or expressions over names of this file. What is not named stays open, as `name.tanks`: free to be fitted or set, and the same in all repeats.",
      example: "{total: 2.4 m3, renewal: 4 L/min / reactor.feed.flow}",
    },
    repeat: {
      shape: { is: "whole", atLeast: 1, atMost: 10_000 },
      says: "How many of the part stand in series, each of them whole, as `name.1`, `name.2`, …. It must have one feed and one outlet. A stream may enter any of them (`to: name.2`); what follows the flow is then each one's own, as `name.2.renewal`.",
      default: "1",
      example: "3",
    },
    to: {
      shape: {
        is: "either",
        of: [
          { is: "name" },
          {
            is: "named",
            keys: "names",
            each: {
              is: "either",
              of: [
                { is: "text" },
                { is: "named", each: { is: "quantity", dimension: ["ratio", "flow"] }, keys: "dotted" },
              ],
            },
          },
        ],
      },
      required: true,
      says: "Where its outlets lead: one name where it has one outlet, else a map from each outlet to a destination, or to a split of what leaves there.",
      example: "{overflow: product, underflow: {thickener: 30 %, sewer: rest}}",
    },
  },
  flows: true,
  exchanges: false,
  mayExchange: () => false,
  placed: true,
  volume: () => 0,
  spell: () => undefined,
  picture: (box) => junctionBody(box),
  aspect: () => 1,
};
