import type { Plant } from "../../compile/plant.js";
import { partingsOf } from "../../compile/sends.js";
import { holdUp } from "../../units/basis.js";
import { dimensions } from "../../units/dimension.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit } from "../../units/unit.js";
import { bodiesOf, vesselOf } from "../vessel.js";
import { blocks, pairs, table } from "./table.js";

/** Solved flows, volumes, space times and the vessel, for people. */
export function networkText(plant: Plant): string {
  const { units } = plant.network;
  const [flow, volume, time] = [units.unitFor(dimensions.flow), units.unitFor(dimensions.volume), units.time];
  const streams = table(
    [{ title: "stream" }, { title: `flow, ${flow.name}`, align: "right" }, { title: "written" }, { title: "" }],
    plant.streams.map((s) => [
      `${s.leaves} ${s.role === "exchange" ? "<>" : "->"} ${s.enters}`,
      formatNumber(inUnit(s.flow, flow)),
      s.written === "all" ? "" : s.written,
      s.role === "forward" ? "" : s.role,
    ]),
  );
  const bodies = bodiesOf(plant).map((b) => [
    b.name,
    b.kind,
    formatNumber(inUnit(b.volume, volume)),
    formatNumber(inUnit(b.flow, flow)),
    b.flow > 0 || b.volume === 0 ? formatNumber(inUnit(b.spaceTime, time)) : "no flow",
  ]);
  const partings = partingsOf(plant).map((p) => [
    p.of,
    `${p.from} -> ${p.to}`,
    `${formatNumber(100 * p.share)} %`,
    `${formatNumber(100 * p.liquid)} %`,
    p.liquid > 0 ? formatNumber(p.share / p.liquid) : "",
  ]);
  const right = (title: string) => ({ title, align: "right" as const });
  const vessel = vesselOf(plant);
  const dead = vessel.dead > 0 ? `, ${formatQuantity(vessel.dead, volume)} of it dead` : "";
  return blocks(
    plant.streams.length > 0 ? streams : "",
    table(
      [
        { title: "body" },
        { title: "kind" },
        { title: `${holdUp(plant.network.basis)}, ${volume.name}`, align: "right" },
        { title: `through-flow, ${flow.name}`, align: "right" },
        { title: `space time, ${time.name}`, align: "right" },
      ],
      bodies,
    ),
    partings.length > 0
      ? table(
          [
            { title: "substance" },
            { title: "stream" },
            right("share of it"),
            right("of the liquid"),
            right("times as concentrated"),
          ],
          partings,
        )
      : "",
    pairs([
      ["vessel", `${formatQuantity(vessel.volume, volume)}${dead}`],
      ...(vessel.meanTime === undefined
        ? ([["closed", "nothing enters or leaves, so there is no mean time"]] as const)
        : ([
            ["feed", formatQuantity(vessel.feed, flow)],
            ["mean time", `${formatQuantity(vessel.meanTime, time)} (active ${holdUp(plant.network.basis)} over feed)`],
          ] as const)),
    ]),
  );
}
