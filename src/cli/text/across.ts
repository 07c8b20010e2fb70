import type { Across } from "../../study/across.js";
import { blocks } from "./table.js";

/** What trials say together, for people. */
export function acrossText({ findings, notSupported }: Across): string {
  return blocks(
    findings
      .map(
        (f) =>
          `${f.weight} ${f.code} at ${f.at}: ${f.message} (${f.evidence})\n  could be: ${f.couldBe}\n  next: ${f.next}`,
      )
      .join("\n"),
    notSupported.length > 0 ? `not told: ${notSupported.join(";\n          ")}` : "",
  );
}
