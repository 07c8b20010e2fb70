import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import type { RegulatedFigures } from "../../reaction/regulated.js";
import { cautionsOf } from "../../report/cautions.js";
import { dutyTriggers } from "../../report/duty-cautions.js";
import { regulatedCaution, regulatedLines } from "../../report/study/regulated-words.js";
import { blocks, table, wrap } from "./table.js";

/** The regulated figures in a block of their own. */
export function regulatedText(figures: RegulatedFigures | undefined, { regulated }: Duty, { network }: Plant): string {
  if (!figures || !regulated) return "";
  const rows = regulatedLines(figures, regulated, network.units).map(({ name, value, from }) => [name, value, from]);
  return blocks(
    `  regulated figures\n${table([{ title: "" }, { title: "", align: "right" }, { title: "" }], rows).replace(/^\n/, "")}`,
    wrap("  ", regulatedCaution),
  );
}

/** What the figures of a duty must not be used for without more; of heat the steady states speak themselves. */
export const cautionsText = (duty: Duty): string =>
  cautionsOf({ ...dutyTriggers([duty]), heat: false })
    .map(({ says }) => wrap("  caution: ", says))
    .join("\n");
