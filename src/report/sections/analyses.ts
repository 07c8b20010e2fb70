import { formatNumber } from "../../units/format.js";
import { type Html, table } from "../html.js";
import type { Analysis } from "../input.js";

/** Analyses of a vessel that had settled, beside what the fit gives there. */
export const analysesTable = (analyses: readonly Analysis[]): Html =>
  table(
    "Analyses of the vessel where it had settled; off by so many standard deviations of the analysis",
    [
      { head: "trial" },
      { head: "of" },
      { head: "found", number: true },
      { head: "fitted", number: true },
      { head: "off by", number: true },
    ],
    analyses.map((a) => [a.trial, a.of, a.found, a.fitted, formatNumber(a.deviations, 2)]),
  );
