import { placeOf, type Span, usesOf } from "../../text/source.js";
import type { Problem } from "../problem.js";

/** A SARIF log: OASIS, Static Analysis Results Interchange Format (SARIF) Version 2.1.0, 2020. What code-scanning services read. */
export interface SarifLog {
  readonly $schema: string;
  readonly version: "2.1.0";
  readonly runs: readonly SarifRun[];
}

interface SarifRun {
  readonly tool: {
    readonly driver: {
      readonly name: string;
      readonly version: string;
      readonly rules: readonly { readonly id: string }[];
    };
  };
  readonly columnKind: "utf16CodeUnits";
  readonly results: readonly SarifResult[];
}

interface SarifResult {
  readonly ruleId: string;
  readonly ruleIndex: number;
  readonly level: "error" | "warning";
  readonly message: { readonly text: string };
  readonly locations: readonly SarifLocation[];
  readonly relatedLocations?: readonly SarifLocation[];
}

interface SarifLocation {
  readonly physicalLocation: {
    readonly artifactLocation: { readonly uri: string };
    readonly region: {
      readonly startLine: number;
      readonly startColumn: number;
      readonly endLine: number;
      readonly endColumn: number;
    };
  };
  readonly message?: { readonly text: string };
}

/** Problems as one SARIF log, a rule for each code that occurs; the fix is part of the message. */
export function sarifLog(problems: readonly Problem[], version: string): SarifLog {
  const codes = [...new Set(problems.map((p) => p.code))].sort();
  const index = new Map(codes.map((code, i) => [code, i]));
  return {
    $schema: "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json",
    version: "2.1.0",
    runs: [
      {
        tool: { driver: { name: "backmix", version, rules: codes.map((id) => ({ id })) } },
        columnKind: "utf16CodeUnits",
        results: problems.map(({ code, severity, message, fix, at, also }) => ({
          ruleId: code,
          ruleIndex: index.get(code) ?? -1,
          level: severity,
          message: { text: `${message}\nfix: ${fix}` },
          locations: [location(at)],
          ...related([
            ...usesOf(at.source).map((use) => ({
              at: use.at,
              says: use.as === "part" ? "used here" : "the base of this",
            })),
            ...(also ? [also] : []),
          ]),
        })),
      },
    ],
  };
}

const related = (places: readonly { at: Span; says: string }[]): Pick<SarifResult, "relatedLocations"> =>
  places.length === 0
    ? {}
    : { relatedLocations: places.map(({ at, says }) => ({ ...location(at), message: { text: says } })) };

function location(at: Span): SarifLocation {
  const { line, column, endLine, endColumn } = placeOf(at);
  return {
    physicalLocation: {
      artifactLocation: { uri: uriOf(at.source.path) },
      region: { startLine: line, startColumn: column, endLine, endColumn },
    },
  };
}

/** A path as a URI reference: relative stays relative; absolute ones, drives too, become `file:` URIs. */
function uriOf(path: string): string {
  const parts = path.replace(/\\/g, "/").split("/");
  const drive = /^[A-Za-z]:$/.test(parts[0]);
  const encoded = parts.map((part, i) => (drive && i === 0 ? part : encodeURIComponent(part))).join("/");
  if (drive) return `file:///${encoded}`;
  return path.startsWith("/") ? `file://${encoded}` : encoded;
}
