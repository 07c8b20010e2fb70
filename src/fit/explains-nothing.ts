import type { Fit } from "./result.js";

/** True where the network does no better than a flat line through each reading: no number is to be taken from it. */
export const explainsNothing = (fit: Fit): boolean => fit.findings.some((f) => f.code === "explains-nothing");
