import { heading, list, record, text, whole } from "./common.js";

/** The whole job. */
export const studyShape = record({
  ...heading("study", "The question that the study answers.", "Why does V-3 convert less than designed?"),
  rivals: {
    shape: list(text),
    says: "Network files that compete to explain the trials, relative to this file. Each is fitted to all trials; they are ranked by AICc.",
    required: true,
    example: "[v3-bypass.yaml, v3-corner.yaml]",
  },
  trials: {
    shape: list(text),
    says: "Trial files that every rival is fitted to, all at once. Without one there is nothing to fit, and so nothing to rank or predict.",
    example: "[v3-salt.yaml]",
  },
  duties: {
    shape: list(text),
    says: "Duty files that are predicted, with intervals that carry what the fit left open and every declared `±`.",
    example: "[v3-normal.yaml]",
  },
  changes: {
    shape: list(text),
    says: "Change files (a `network` with `change`) that are tried on every surviving rival, with its fitted values. One that names something a rival lacks is skipped for that rival, and said.",
    example: "[v3-baffled.yaml]",
  },
  out: {
    shape: text,
    says: "The folder for the report, relative to this file. `-o` comes first.",
    example: "reports/v3",
  },
  seed: {
    shape: whole(0),
    says: "Seed of everything drawn at random, so that a study can be repeated.",
    default: "1",
    example: "7",
  },
});
