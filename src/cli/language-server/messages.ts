/** One message of JSON-RPC 2.0 (jsonrpc.org/specification): a request where it has an id and a method. */
export interface Message {
  readonly id?: number | string | null;
  readonly method?: string;
  readonly params?: unknown;
}

/** Takes more than any document that is read, in bytes. */
const longest = 64 * 1024 * 1024;

/** Cuts a stream of bytes into messages by their `Content-Length`, as the Language Server Protocol sends them. */
export class MessageReader {
  private held = Buffer.alloc(0);

  /** @returns the messages that are whole now; `undefined` stands for one that is no JSON */
  take(bytes: Uint8Array): readonly (Message | undefined)[] {
    this.held = Buffer.concat([this.held, bytes]);
    const whole: (Message | undefined)[] = [];
    for (;;) {
      const end = this.held.indexOf("\r\n\r\n");
      if (end < 0) return whole;
      const length = Number(/content-length: *(\d+)/i.exec(this.held.subarray(0, end).toString("latin1"))?.[1]);
      if (!(length <= longest)) {
        // no length, no way to tell where the next begins: leave the head out
        this.held = this.held.subarray(end + 4);
        whole.push(undefined);
        continue;
      }
      if (this.held.length < end + 4 + length) return whole;
      whole.push(parsed(this.held.subarray(end + 4, end + 4 + length).toString("utf8")));
      this.held = this.held.subarray(end + 4 + length);
    }
  }
}

/** A message as it is sent. */
export function framed(message: object): string {
  const body = JSON.stringify({ jsonrpc: "2.0", ...message });
  return `Content-Length: ${Buffer.byteLength(body)}\r\n\r\n${body}`;
}

function parsed(body: string): Message | undefined {
  try {
    const value: unknown = JSON.parse(body);
    return typeof value === "object" && value !== null ? (value as Message) : undefined;
  } catch {
    return undefined;
  }
}
