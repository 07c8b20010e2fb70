import { figures, type Html, list, section, terms } from "../html.js";
import type { StudyReport } from "../input.js";

/** What it takes to meet what is aimed at. */
export const aimsSection = ({ aims }: StudyReport): Html =>
  section("aims", "What it takes", [terms(aims.map((a) => [a.question, a.says.join(" ")]))]);

/** Figures over their inputs. */
export const sweepsSection = ({ sweeps, sweepSays = [] }: StudyReport): Html =>
  section("sweeps", "Over a range", [figures(sweeps), list(sweepSays)]);
