import { stirredBody } from "../svg/bodies.js";
import type { CompartmentKind, Ports } from "./kind.js";

/** Ideal stirred tank; `repeat` puts n equal ones in series. MacMullin & Weber, Trans. AIChE 31 (1935) 409-458. */
export const stirred: CompartmentKind = {
  name: "stirred",
  says: "An ideal stirred tank: what enters is spread at once over the whole volume. `repeat: n` puts n equal ones in series.",
  keys: {
    volume: {
      shape: { is: "quantity", dimension: "volume" },
      required: true,
      says: "Liquid held; with `repeat`, of the whole chain.",
      example: "800 L",
    },
    repeat: {
      shape: { is: "whole", atLeast: 1, atMost: 10_000 },
      says: "How many equal tanks in series share the volume; members are `name.1`, `name.2`, ….",
      example: "3",
      default: "1",
    },
  },
  flows: true,
  exchanges: true,
  mayExchange: (counts) => (counts.repeat ?? 1) === 1,
  volume: ({ values }) => values.volume,
  spell(maker, { values, counts }): Ports {
    const n = counts.repeat ?? 1;
    const members = Array.from({ length: n }, (_, i) => {
      const suffix = n > 1 ? String(i + 1) : "";
      return { suffix, node: values.volume > 0 ? maker.cell(values.volume / n, suffix) : maker.joint() };
    });
    for (let i = 1; i < n; i++) maker.chain(members[i - 1].node, members[i].node);
    return { entry: members[0].node, exit: members[n - 1].node, members: n > 1 ? members : [] };
  },
  picture: (box, { counts }) => stirredBody(box, counts.repeat ?? 1),
  aspect: ({ counts }) => Math.min(counts.repeat ?? 1, 6),
};
