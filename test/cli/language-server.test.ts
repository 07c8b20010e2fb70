import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { framed, type Message, MessageReader } from "../../src/cli/language-server/messages.js";
import { Session } from "../../src/cli/language-server/session.js";

describe("messages", () => {
  test("come whole however the stream is cut, in any language", () => {
    const sent = [
      { id: 1, method: "a", params: { text: "Bürette µ → 🙂\r\n\r\n" } },
      { method: "b" },
      { id: 2, method: "c" },
    ];
    const bytes = Buffer.from(sent.map(framed).join(""));
    fc.assert(
      fc.property(fc.array(fc.nat(bytes.length), { maxLength: 6 }), (cuts) => {
        const reader = new MessageReader();
        const ends = [0, ...cuts.sort((a, b) => a - b), bytes.length];
        const got = ends.slice(1).flatMap((end, k) => reader.take(bytes.subarray(ends[k], end)));
        expect(got).toEqual(sent.map((m) => ({ jsonrpc: "2.0", ...m })));
      }),
    );
  });

  test("what is no message is told apart, and the next is read", () => {
    const reader = new MessageReader();
    const bad = reader.take(Buffer.from(`Content-Length: 3\r\n\r\n{,}${framed({ method: "x" })}`));
    expect(bad).toEqual([undefined, { jsonrpc: "2.0", method: "x" }]);
    expect(reader.take(Buffer.from("Content-Type: none\r\n\r\n"))).toEqual([undefined]);
  });
});

/** A session over files of the repository, and what it has sent. */
function session() {
  const sent: (Message & { result?: unknown; error?: { code: number }; params?: { diagnostics?: unknown[] } })[] = [];
  const own = new Session({
    io: { read: (path) => readOr(path), obstacle: () => undefined },
    allowOutside: true,
    send: (m) => void sent.push(m as (typeof sent)[number]),
  });
  let id = 0;
  const ask = (method: string, params: object = {}) => {
    id++;
    own.handle({ id, method, params });
    return sent.find((m) => m.id === id);
  };
  const tell = (method: string, params: object) => own.handle({ method, params });
  return { own, sent, ask, tell };
}

const readOr = (path: string): Uint8Array | undefined => {
  try {
    return readFileSync(path);
  } catch {
    return undefined;
  }
};

const uri = new URL("../../networks/demo/bypass.yaml", import.meta.url).href;
const text = readFileSync(new URL(uri), "utf8");
const doc = { textDocument: { uri } };

describe("a session", () => {
  const opened = () => {
    const s = session();
    s.ask("initialize", {});
    s.tell("textDocument/didOpen", { textDocument: { uri, version: 1, text } });
    return s;
  };

  test("tells the problems of a change at their place, and that they are gone", () => {
    const { sent, tell } = opened();
    expect(sent.at(-1)?.params).toMatchObject({ uri, version: 1, diagnostics: [] });
    const broken = text.replace("outlets:", "outlet:");
    tell("textDocument/didChange", { textDocument: { uri, version: 2 }, contentChanges: [{ text: broken }] });
    const line = broken.split("\n").findIndex((l) => l.startsWith("outlet:"));
    const found = sent.at(-1)?.params?.diagnostics as { code: string; range: { start: object }; message: string }[];
    const own = found.find((d) => d.code === "unknown-key");
    expect(own?.range.start).toEqual({ line, character: 0 });
    expect(own?.message).toContain("outlets");
    tell("textDocument/didChange", { textDocument: { uri, version: 3 }, contentChanges: [{ text }] });
    expect(sent.at(-1)?.params?.diagnostics).toEqual([]);
    tell("textDocument/didClose", doc);
    expect(sent.at(-1)?.params?.diagnostics).toEqual([]);
  });

  test("a trial is looked at again when the network that it names is changed in the editor", () => {
    const { sent, tell } = opened();
    const trial = new URL("salt-normal.yaml", uri).href;
    const vessel = new URL("both.yaml", uri).href;
    tell("textDocument/didOpen", { textDocument: { uri: trial, text: readFileSync(new URL(trial), "utf8") } });
    const both = readFileSync(new URL(vessel), "utf8");
    const renamed = both.replaceAll("product", "drain");
    tell("textDocument/didOpen", { textDocument: { uri: vessel, text: renamed } });
    const last = sent.filter((m) => (m.params as { uri?: string } | undefined)?.uri === trial).at(-1);
    expect(last?.params?.diagnostics?.length).toBeGreaterThan(0);
  });

  test("hover, completion and definition answer with ranges of the document", () => {
    const { ask } = opened();
    const lines = text.split("\n");
    const line = lines.findIndex((l) => l.startsWith("outlets:"));
    const at = { ...doc, position: { line, character: 3 } };
    expect(ask("textDocument/hover", at)?.result).toMatchObject({
      contents: { kind: "markdown", value: expect.stringContaining("**outlets**") },
      range: { start: { line, character: 0 }, end: { line, character: 7 } },
    });
    const inside = { ...doc, position: { line, character: lines[line].indexOf("product") + 2 } };
    const defined = ask("textDocument/definition", inside)?.result as {
      uri: string;
      range: { start: { line: number } };
    };
    expect(defined).toMatchObject({ uri, range: { start: { line } } });
    const offers = ask("textDocument/completion", { ...doc, position: { line: lines.length - 1, character: 0 } });
    expect(offers?.result).toContainEqual(expect.objectContaining({ label: "basis", kind: 10 }));
  });

  test("says what it does not do, before and after its time, and ends as the protocol asks", () => {
    const s = session();
    expect(s.ask("textDocument/hover", doc)?.error?.code).toBe(-32002);
    s.ask("initialize");
    expect(s.ask("textDocument/rename", doc)?.error?.code).toBe(-32601);
    expect(s.ask("textDocument/hover", { ...doc, position: { line: 0, character: 0 } })?.result).toBeNull();
    s.own.handle(undefined);
    expect(s.sent.at(-1)?.error?.code).toBe(-32700);
    expect(s.own.handle({ method: "$/setTrace", params: {} })).toBeUndefined();
    expect(s.ask("shutdown")?.result).toBeNull();
    expect(s.ask("textDocument/hover", doc)?.error?.code).toBe(-32600);
    expect(s.own.handle({ method: "exit" })).toBe(0);
    expect(session().own.handle({ method: "exit" })).toBe(1);
  });
});
