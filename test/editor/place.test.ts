import { describe, expect, test } from "vitest";
import { placeAt } from "../../src/editor/place.js";

/** The place at `|`. */
function at(text: string) {
  const offset = text.indexOf("|");
  const { path, onKey, word } = placeAt(text.replace("|", ""), offset);
  return { path: path.join(" "), onKey, word };
}

describe("where a cursor stands, by indentation and brackets", () => {
  test.each([
    ["at the margin", "network: A\nformat: 1\n|", "", true, ""],
    ["in a key", "network: A\nfee|ds:\n", "", true, "feeds"],
    ["in an indented key", "compartments:\n  bulk:\n    kind: stirred\n    vol|\n", "compartments bulk", true, "vol"],
    ["in a value", "compartments:\n  bulk:\n    kind: stir|red\n", "compartments bulk kind", false, "stirred"],
    ["behind a deeper map", "compartments:\n  bulk:\n    kind: stirred\n  |\n", "compartments", true, ""],
    ["in a flow map", "compartments:\n  bulk: {kind: stirred, vo|", "compartments bulk", true, "vo"],
    ["in its value", "compartments:\n  bulk: {kind: stirred, to: pr|oduct}", "compartments bulk to", false, "product"],
    ["in a map within", "feeds: {raw: {flow: 1 L/min, to: {|", "feeds raw to", true, ""],
    ["in a share there", "feeds: {raw: {flow: 1 L/min, to: {a: 30 %, b: re|", "feeds raw to b", false, "re"],
    ["over several lines", "feeds:\n  raw: {flow: 1 L/min,\n    to: {a: 30 %, b: re|", "feeds raw to b", false, "re"],
    ["behind a closed one", "feeds: {raw: {flow: 1 L/min}}\nout|lets: [a]", "", true, "outlets"],
    ["in a list", "readings:\n  - at: a\n    fi|", "readings", true, "fi"],
    ["in a flow list", "outlets: [a, b|]", "outlets", false, "b"],
    ["past a comment with a brace", "network: A # {\nfo|rmat: 1", "", true, "format"],
    ["past a quoted brace", 'network: "A {"\nfo|rmat: 1', "", true, "format"],
  ])("%s", (_, text, path, onKey, word) => {
    expect(at(text)).toEqual({ path, onKey, word });
  });

  test("never throws, wherever the cursor is and whatever stands there", () => {
    const text = "feeds: {raw: {flow: 1 L/min, to: {a: [}]: 30 %\n  - x: 'y\n\t{{{ ]]] : :\r\n";
    for (let k = 0; k <= text.length; k++) expect(() => placeAt(text, k)).not.toThrow();
  });
});
