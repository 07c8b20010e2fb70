import type { Regulated } from "../../model/duty.js";
import type { UnitBook } from "../../model/network.js";
import type { RegulatedFigures } from "../../reaction/regulated.js";
import { dimensions } from "../../units/dimension.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";
import type { ReportRegulated } from "../input.js";

/** Concentration times time, as tables of contact times have it. */
export const contactTimeUnit: Unit = {
  name: "mg·min/L",
  factor: 0.06,
  offset: 0,
  dimension: dimensions["contact time"],
};

const massPerVolume: Unit = { name: "mg/L", factor: 1e-3, offset: 0, dimension: dimensions["mass concentration"] };

/** Said wherever these figures stand. */
export const regulatedCaution =
  "These follow the arithmetic of a contact-time method from what the duty declares. Only the regulator's own method, table and tracer test count; a modelled log-removal is never added to them.";

/**
 * The block line by line: what, how much, what it is made of.
 * @param lower one-sided 95 % lower bound of t10, s, where it is known
 */
export function regulatedLines(
  figures: RegulatedFigures,
  { residual }: Regulated,
  units: UnitBook,
  lower?: number,
): ReportRegulated[] {
  const time = (s: number): string => formatQuantity(s, units.time, 3);
  const scaled = (x: number, say: (v: number) => string): { lower?: string } =>
    lower === undefined || !(figures.t10 > 0) ? {} : { lower: say((x * lower) / figures.t10) };
  const unit = residual?.unit ?? massPerVolume;
  const { t10, detention, bafflingFactor, ct, from } = figures;
  return [
    {
      name: "theoretical time V/Q",
      value: time(detention),
      from: `${formatQuantity(figures.volume, units.unitFor(dimensions.volume), 4)} over ${formatQuantity(figures.flow, units.unitFor(dimensions.flow), 4)}`,
    },
    {
      name: `t10 at ${figures.outlet}`,
      value: time(t10),
      from: from === "network" ? "of the network at this flow" : "assigned baffling factor times V/Q",
      ...(from === "network" ? scaled(t10, time) : {}),
    },
    {
      name: "baffling factor t10/(V/Q)",
      value: formatNumber(bafflingFactor, 2),
      from: from === "network" ? "of the network" : "assigned, as declared",
      ...(from === "network" ? scaled(bafflingFactor, (v) => formatNumber(v, 2)) : {}),
    },
    ...(ct === undefined || figures.residual === undefined
      ? []
      : [
          {
            name: "CT",
            value: formatQuantity(ct, contactTimeUnit, 3),
            from: `declared residual ${formatQuantity(figures.residual, unit, 3)} times t10`,
            ...(from === "network" ? scaled(ct, (v) => formatQuantity(v, contactTimeUnit, 3)) : {}),
          },
        ]),
    ...figures.credits.map((c) => ({
      name: `credit for ${c.name}`,
      value: `${formatNumber(c.credit, 2)} log`,
      from: `declared entry: ${formatNumber(c.log, 3)} log for ${formatQuantity(c.asked, contactTimeUnit, 4)}; ratio ${formatNumber(c.ratio, 2)}, in proportion`,
      ...(from === "network" ? scaled(c.credit, (v) => `${formatNumber(v, 2)} log`) : {}),
    })),
  ];
}
