import type { KeyShape } from "../schema/shape.js";
import { pocketsBody } from "../svg/bodies.js";
import { group } from "../svg/marks.js";
import type { Box, Svg } from "../svg/svg.js";
import type { Pockets } from "./block.js";
import type { KindValues } from "./kind.js";

/** Pockets of quiet liquid along a body, for every kind that may have them. R.J. Adler, R.B. Hovorka, JACC preprint 3 (1961). */
export const stagnantKey: KeyShape = {
  shape: {
    is: "record",
    keys: {
      volume: {
        shape: { is: "quantity", dimension: "volume", atLeast: 0 },
        required: true,
        says: "Liquid held in all pockets together; it counts in the vessel beside the body's own `volume`.",
        example: "20 L",
      },
      exchange: {
        shape: { is: "quantity", dimension: "flow", atLeast: 0 },
        required: true,
        says: "Flow exchanged with all pockets together, equal both ways; at 0 they are dead volume.",
        example: "1 L/min",
      },
    },
  },
  says: "Quiet pockets spread evenly along the body, each mixed in itself, that exchange with the flow beside them.",
  example: "{volume: 20 L, exchange: 1 L/min}",
};

/** m3 held in a body's pockets, reached by the flow or not. */
export const heldIn = ({ values }: Pick<KindValues, "values">): number => values["stagnant.volume"] ?? 0;

/** Pockets that the flow reaches. */
export function pocketsOf({ values }: Pick<KindValues, "values">): Pockets | undefined {
  const [volume, exchange] = [values["stagnant.volume"] ?? 0, values["stagnant.exchange"] ?? 0];
  return volume > 0 && exchange > 0 ? { volume, exchange } : undefined;
}

/** A body's picture with its pockets below it; each takes its share of the box. */
export function withPockets(box: Box, of: KindValues, body: (box: Box) => Svg): Svg {
  const held = heldIn(of);
  const total = of.values.volume + held;
  if (!(held > 0) || !(total > 0)) return body(box);
  const height = box.height * Math.min(0.85, Math.max(0.15, of.values.volume / total)); // both stay to be seen
  return group("with-pockets", [
    body({ ...box, height }),
    pocketsBody({ ...box, y: box.y + height, height: box.height - height }),
  ]);
}
