import { readdirSync } from "node:fs";

/** Every document that backmix ships, by its path; results of a study are none. */
export const shipped: readonly string[] = ["networks", "shared"].flatMap((folder) =>
  readdirSync(folder, { recursive: true, encoding: "utf8" })
    .map((file) => `${folder}/${file.replace(/\\/g, "/")}`)
    .filter((file) => file.endsWith(".yaml") && !file.includes("/reports/"))
    .sort(),
);
