import { fileURLToPath } from "node:url";
import { complete, definition, describe, type Open, treeOf } from "../../editor/ask.js";
import { parseAny } from "../../parse/any.js";
import { problemJson } from "../../problems/json.js";
import { decodeText } from "../../read/decode.js";
import type { MapNode } from "../../read/tree.js";
import { placeOf } from "../../text/source.js";
import { Inputs } from "../inputs.js";
import type { Io } from "../io.js";
import { version } from "../version.js";
import type { Message } from "./messages.js";

/** What a session needs of the world. */
export interface SessionWorld {
  readonly io: Pick<Io, "read" | "obstacle" | "real" | "size" | "library">;
  readonly allowOutside: boolean;
  send(message: object): void;
}

interface Document extends Open {
  readonly version: number | undefined;
  readonly known: MapNode | undefined;
}

/** Line and column from 0, in UTF-16 units. */
interface Position {
  readonly line: number;
  readonly character: number;
}

const codes = { parseError: -32700, invalidRequest: -32600, methodNotFound: -32601, notReady: -32002, fault: -32603 };
const kindsOfOffers = { key: 10, word: 12, name: 6 }; // Property, Value, Variable
const [asError, asWarning] = [1, 2];

/**
 * A session of the Language Server Protocol 3.17: problems as `check` tells them on every change, what a key means, what may be
 * typed, where a name is declared. Documents are sent whole.
 */
export class Session {
  private readonly open = new Map<string, Document>();
  private ready = false;
  private shutDown = false;

  constructor(private readonly world: SessionWorld) {}

  /** Handles one message. @returns the exit status once the client has said `exit` */
  handle(message: Message | undefined): 0 | 1 | undefined {
    if (message === undefined) {
      this.world.send({ id: null, error: { code: codes.parseError, message: "that is no JSON message" } });
      return undefined;
    }
    const { id, method, params } = message;
    if (method === "exit") return this.shutDown ? 0 : 1;
    if (method === undefined) return undefined; // an answer: nothing was asked
    if (id === undefined) {
      if (this.ready && !this.shutDown) this.told(method, params);
      return undefined;
    }
    const refuse = (code: number, words: string): void => this.world.send({ id, error: { code, message: words } });
    if (this.shutDown) refuse(codes.invalidRequest, "the session is shut down");
    else if (!this.ready && method !== "initialize") refuse(codes.notReady, "initialize first");
    else {
      try {
        const result = this.asked(method, params);
        if (result === undefined) refuse(codes.methodNotFound, `'${method}' is not answered here`);
        else this.world.send({ id, result });
      } catch (e) {
        refuse(codes.fault, e instanceof Error ? e.message : String(e));
      }
    }
    return undefined;
  }

  private asked(method: string, params: unknown): unknown {
    switch (method) {
      case "initialize":
        this.ready = true;
        return {
          capabilities: {
            positionEncoding: "utf-16",
            textDocumentSync: { openClose: true, change: 1, save: true },
            hoverProvider: true,
            completionProvider: { triggerCharacters: [" ", "{", "[", ","] },
            definitionProvider: true,
          },
          serverInfo: { name: "backmix", version },
        };
      case "shutdown":
        this.shutDown = true;
        return null;
      case "textDocument/hover": {
        const { document, offset } = this.at(params);
        const found = document && describe(document, offset);
        if (!document || !found) return null;
        return {
          contents: { kind: "markdown", value: found.says },
          range: rangeOf(document.text, found.from, found.to),
        };
      }
      case "textDocument/completion": {
        const { document, offset } = this.at(params);
        if (!document) return [];
        const { offers, from, to } = complete(document, offset);
        const range = rangeOf(document.text, from, to);
        return offers.map((o) => ({
          label: o.label,
          kind: kindsOfOffers[o.is],
          ...(o.says === undefined ? {} : { documentation: o.says }),
          textEdit: { range, newText: o.insert },
        }));
      }
      case "textDocument/definition": {
        const { uri, document, offset } = this.at(params);
        const found = document && definition(document, offset);
        if (!document || !found) return null;
        if ("file" in found) return { uri: new URL(found.file, uri).href, range: rangeOf("", 0, 0) };
        return { uri, range: rangeOf(document.text, found.at.from, found.at.to) };
      }
      default:
        return undefined;
    }
  }

  private told(method: string, params: unknown): void {
    const uri = textIn(params, "textDocument", "uri");
    if (uri === undefined) return;
    if (method === "textDocument/didOpen") this.hold(uri, textIn(params, "textDocument", "text"), params);
    else if (method === "textDocument/didChange") {
      const changes = valueIn(params, "contentChanges");
      this.hold(uri, Array.isArray(changes) ? textIn(changes[changes.length - 1], "text") : undefined, params);
    } else if (method === "textDocument/didClose") {
      this.open.delete(uri);
      this.world.send({ method: "textDocument/publishDiagnostics", params: { uri, diagnostics: [] } });
    } else if (method === "textDocument/didSave") this.look();
  }

  private hold(uri: string, text: string | undefined, params: unknown): void {
    if (text === undefined) return;
    const known = treeOf(text) ?? this.open.get(uri)?.known;
    const number = valueIn(params, "textDocument", "version");
    this.open.set(uri, { text, known, version: typeof number === "number" ? number : undefined });
    this.look();
  }

  /** All open documents: one may rest on another. */
  private look(): void {
    for (const [uri, { text, version: number }] of this.open) {
      const diagnostics = this.problemsOf(uri, text);
      const params = { uri, ...(number === undefined ? {} : { version: number }), diagnostics };
      this.world.send({ method: "textDocument/publishDiagnostics", params });
    }
  }

  private problemsOf(uri: string, text: string): readonly object[] {
    const path = pathOf(uri);
    const held = new Map([...this.open].map(([u, d]) => [pathOf(u), d.text]));
    const { io } = this.world;
    const inputs = new Inputs({ ...io, read: (p, most) => held.get(p) ?? io.read(p, most) });
    inputs.allowOutside = this.world.allowOutside;
    return parseAny(decodeText(text), inputs.options(path)).problems.map((p) => {
      const { code, severity, message, fix, file, line, column, endLine, endColumn } = problemJson(p);
      const here = file === path;
      return {
        range: here
          ? { start: position(line - 1, column - 1), end: position(endLine - 1, endColumn - 1) }
          : { start: position(0, 0), end: position(0, 0) },
        severity: severity === "error" ? asError : asWarning,
        code,
        source: "backmix",
        message: `${here ? "" : `${file}:${line}:${column}: `}${message}\nfix: ${fix}`,
      };
    });
  }

  private at(params: unknown): { uri: string; document: Document | undefined; offset: number } {
    const uri = textIn(params, "textDocument", "uri") ?? "";
    const document = this.open.get(uri);
    const line = valueIn(params, "position", "line");
    const character = valueIn(params, "position", "character");
    if (!document || typeof line !== "number" || typeof character !== "number")
      return { uri, document: undefined, offset: 0 };
    return { uri, document, offset: offsetAt(document.text, { line, character }) };
  }
}

const position = (line: number, character: number): Position => ({ line, character });

function offsetAt(text: string, { line, character }: Position): number {
  let start = 0;
  for (let k = 0; k < line; k++) {
    const end = text.indexOf("\n", start);
    if (end < 0) return text.length;
    start = end + 1;
  }
  const end = text.indexOf("\n", start);
  return Math.min(start + character, end < 0 ? text.length : end);
}

function rangeOf(text: string, from: number, to: number): { start: Position; end: Position } {
  const { line, column, endLine, endColumn } = placeOf({ source: { path: "", text }, from, to });
  return { start: position(line - 1, column - 1), end: position(endLine - 1, endColumn - 1) };
}

/** A file by its path; what has none goes by its name. */
function pathOf(uri: string): string {
  if (!uri.startsWith("file:")) return uri;
  try {
    return fileURLToPath(uri);
  } catch {
    return uri;
  }
}

function valueIn(value: unknown, ...keys: readonly string[]): unknown {
  let here = value;
  for (const key of keys) {
    if (typeof here !== "object" || here === null) return undefined;
    here = (here as Record<string, unknown>)[key];
  }
  return here;
}

function textIn(value: unknown, ...keys: readonly string[]): string | undefined {
  const found = valueIn(value, ...keys);
  return typeof found === "string" ? found : undefined;
}
