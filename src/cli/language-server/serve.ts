import type { Context } from "../context.js";
import type { Outcome } from "../outcome.js";
import { framed, MessageReader } from "./messages.js";
import { Session } from "./session.js";

/** `language-server`: the Language Server Protocol on standard input and output, until the client says `exit` or goes. */
export async function languageServer({ inputs, io }: Context): Promise<Outcome> {
  const session = new Session({
    io,
    allowOutside: inputs.allowOutside,
    send: (message) => void process.stdout.write(framed(message)),
  });
  const reader = new MessageReader();
  const status = await new Promise<0 | 1>((done) => {
    process.stdin.on("data", (bytes: Buffer) => {
      for (const message of reader.take(bytes)) {
        const end = session.handle(message);
        if (end !== undefined) done(end);
      }
    });
    process.stdin.on("end", () => done(1));
  });
  process.stdin.pause();
  return { status, text: "", json: { ok: status === 0 } };
}
