import type { StudyResult } from "../../study/result.js";

/** True where a study has no trial: its networks stand as they are written. */
export const isUntested = ({ study }: StudyResult): boolean => study.trials.length === 0;
