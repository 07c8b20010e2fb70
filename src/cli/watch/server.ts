import { createServer, type IncomingMessage, type ServerResponse } from "node:http";
import type { AddressInfo } from "node:net";
import { UsageError } from "../usage.js";

/** A page on this machine alone, and a stream of events to whoever has it open. */
export interface LiveServer {
  readonly url: string;
  /** To all open pages. */
  send(message: string): void;
  close(): Promise<void>;
}

const host = "127.0.0.1";

/** Nothing but itself: no other origin may be asked for anything. */
const policy =
  "default-src 'none'; style-src 'unsafe-inline'; script-src 'unsafe-inline'; connect-src 'self'; img-src data: blob:";

/**
 * Serves on the loopback address only, and answers only requests that name it: a page of another site that points its own
 * name here is refused.
 * @param page    the whole page
 * @param welcome messages for a page that has just opened
 * @param port    0 for any that is free
 */
export function serve(page: () => string, welcome: () => readonly string[], port: number): Promise<LiveServer> {
  const open = new Set<ServerResponse>();
  const names = new Set<string>();
  const answer = (request: IncomingMessage, response: ServerResponse): void => {
    if (!names.has(request.headers.host ?? "")) refuse(response, 403);
    else if (request.method !== "GET") refuse(response, 405);
    else if (request.url === "/") {
      response.writeHead(200, { ...safe, "content-type": "text/html; charset=utf-8" });
      response.end(page());
    } else if (request.url === "/events") {
      response.writeHead(200, { ...safe, "content-type": "text/event-stream" });
      open.add(response);
      response.on("close", () => open.delete(response));
      response.write(`retry: 500\n\n${welcome().map(event).join("")}`);
    } else refuse(response, 404);
  };
  const server = createServer(answer);
  return new Promise((done, failed) => {
    server.once("error", (e: NodeJS.ErrnoException) =>
      failed(e.code === "EADDRINUSE" ? new UsageError(`--port ${port}: something else listens there`) : e),
    );
    server.listen(port, host, () => {
      const used = (server.address() as AddressInfo).port;
      for (const name of [host, "localhost"]) names.add(`${name}:${used}`);
      done({
        url: `http://${host}:${used}/`,
        send: (message) => {
          for (const response of open) response.write(event(message));
        },
        close: () =>
          new Promise((closed) => {
            server.close(() => closed());
            server.closeAllConnections();
          }),
      });
    });
  });
}

const safe = {
  "cache-control": "no-store",
  "content-security-policy": policy,
  "cross-origin-resource-policy": "same-origin",
  "x-content-type-options": "nosniff",
} as const;

/** One line each: a line break would end the field. */
const event = (message: string): string => `data: ${message.replace(/\r?\n/g, " ")}\n\n`;

function refuse(response: ServerResponse, status: number): void {
  response.writeHead(status, { ...safe, "content-type": "text/plain" });
  response.end();
}
