import { stirredBody } from "../svg/bodies.js";
import type { CompartmentKind, KindValues, NodeMaker, Ports } from "./kind.js";
import { heldIn, pocketsOf, stagnantKey, withPockets } from "./stagnant.js";

/**
 * Ideal stirred tank; `repeat` puts n equal ones in series (MacMullin & Weber, Trans. AIChE 31 (1935) 409-458), with
 * `backflow` between neighbours (Roemer & Durbin, Ind. Eng. Chem. Fundam. 6 (1967) 120-129).
 */
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
      says: "How many equal tanks in series share the volume; members are `name.1`, `name.2`, …, where streams may enter (`to: name.2`; by `name` they enter the first), other tanks may exchange with them, and tracer may be put in and read.",
      example: "3",
      default: "1",
    },
    backflow: {
      shape: { is: "quantity", dimension: ["ratio", "flow"], atLeast: 0 },
      needs: "repeat",
      says: "Flow that returns upstream between each two tanks of `repeat`, on top of what goes forward: a flow, or a share of what goes forward there, which may exceed 100 %. Where a stream enters a later member (`to: name.3`), more goes forward behind it, so a share is of more there.",
      example: "30 %",
    },
    stagnant: {
      ...stagnantKey,
      says: "Quiet pockets, each mixed in itself, that exchange with the tank; with `repeat` every tank has its equal share of them.",
    },
  },
  flows: true,
  exchanges: true,
  sends: true,
  mayExchange: (counts) => (counts.repeat ?? 1) === 1,
  volume: (of) => of.values.volume + heldIn(of),
  spell(maker, of): Ports {
    const n = of.counts.repeat ?? 1;
    const members = Array.from({ length: n }, (_, i) => {
      const suffix = n > 1 ? String(i + 1) : "";
      return { suffix, node: of.values.volume > 0 ? maker.cell(of.values.volume / n, suffix) : maker.joint() };
    });
    const onward = onwardFlows(maker, n);
    for (let i = 1; i < n; i++) {
      const [a, b] = [members[i - 1].node, members[i].node];
      const back = backflow(onward[i - 1], of);
      maker.chain(a, b, onward[i - 1]);
      if (back > 0) maker.exchange(a, b, back);
    }
    const pockets = pocketsOf(of);
    if (pockets) {
      for (const { suffix, node } of members) {
        const pocket = maker.cell(pockets.volume / n, suffix ? `${suffix}.stagnant` : "stagnant");
        maker.exchange(node, pocket, pockets.exchange / n);
      }
    }
    return { entry: members[0].node, exit: members[n - 1].node, members: n > 1 ? members : [] };
  },
  picture: (box, of) =>
    withPockets(box, of, (inner) => stirredBody(inner, of.counts.repeat ?? 1, (of.values.backflow ?? 0) > 0)),
  aspect: ({ counts }) => Math.min(counts.repeat ?? 1, 6),
};

/** What goes on from each member to the next, m3/s: more behind those that streams enter. */
function onwardFlows({ through, brought }: NodeMaker, n: number): Float64Array {
  const onward = new Float64Array(n - 1).fill(through);
  if (!brought) return onward;
  let flow = brought.get("") ?? 0;
  for (let i = 0; i < n - 1; i++) {
    flow += brought.get(String(i + 1)) ?? 0;
    onward[i] = flow;
  }
  return onward;
}

/** Between two members, m3/s. */
function backflow(onward: number, { values, shares }: KindValues): number {
  const written = values.backflow ?? 0;
  return shares.has("backflow") ? written * onward : written;
}
