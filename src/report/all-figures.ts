import type { Figure, StudyReport } from "./input.js";
import { changeFigures, predictionFigures, spreadFigures } from "./interval-figures.js";

/** Every figure of a report's page, in the order of the page. */
export const allFigures = (report: StudyReport): readonly Figure[] => [
  ...(report.vessel ? [report.vessel] : []),
  ...report.curves,
  ...report.rivalCurves,
  ...report.identifiability.figures,
  ...report.residence,
  ...predictionFigures(report),
  ...spreadFigures(report),
  ...report.along,
  ...report.inTime,
  ...changeFigures(report),
  ...report.sweeps,
];
