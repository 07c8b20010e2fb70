declare const BACKMIX_VERSION: string;

/** The version of the package, put in by the build. */
export const version = typeof BACKMIX_VERSION === "string" ? BACKMIX_VERSION : "0.0.0-unbuilt";
