import { existsSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { delimiter, join } from "node:path";
import { pathToFileURL } from "node:url";
import { type Browser, chromium, type Page } from "playwright-core";
import { afterAll, afterEach, beforeAll, describe, expect, test } from "vitest";

const names = ["chromium", "chromium-browser", "google-chrome", "google-chrome-stable"];

/** Path of a Chromium: the one that `CHROMIUM` names, else what is on the PATH. */
function findChromium(): string | undefined {
  const folders = (process.env.PATH ?? "").split(delimiter);
  const found = folders.flatMap((folder) => names.map((name) => join(folder, name)));
  return [process.env.CHROMIUM ?? "", ...found].find((path) => path !== "" && existsSync(path));
}

const path = findChromium();

/** What a test is handed: pages in a real browser, and what went on in them. */
export interface InBrowser {
  /** A page of its own with a file's content, opened from disk. */
  open(html: string, look?: Look): Promise<Opened>;
  /** The same of an address. */
  visit(url: string, look?: Look): Promise<Opened>;
}

export interface Look {
  readonly width?: number;
  readonly height?: number;
  readonly scheme?: "light" | "dark";
}

export interface Opened {
  readonly page: Page;
  /** Errors and warnings of the console, and errors of scripts. */
  readonly complaints: string[];
  /** Addresses asked for besides the page itself. */
  readonly requests: string[];
}

/**
 * Tests in a real browser. Where there is none they are left out, and the one test that is there says so; with
 * `BROWSER_TESTS=required` that is a failure.
 */
export function describeInBrowser(what: string, tests: (browser: InBrowser) => void): void {
  if (path === undefined) {
    test(`${what}: left out, no Chromium is installed`, () => {
      console.warn(`${what}: no Chromium was found (on the PATH or in CHROMIUM); its tests are left out`);
      expect(process.env.BROWSER_TESTS).not.toBe("required");
    });
    return;
  }
  describe(what, () => {
    let browser: Browser | undefined;
    const folder = mkdtempSync(join(tmpdir(), "backmix-pages-"));
    let files = 0;
    beforeAll(async () => {
      browser = await chromium.launch({ executablePath: path, args: ["--no-sandbox", "--disable-gpu"] });
    });
    afterEach(async () => {
      for (const context of browser?.contexts() ?? []) await context.close();
    });
    afterAll(async () => {
      await browser?.close();
      rmSync(folder, { recursive: true, force: true });
    });
    const visit = async (url: string, { width = 1000, height = 800, scheme = "light" }: Look = {}): Promise<Opened> => {
      const page = await browser!.newPage({ viewport: { width, height }, colorScheme: scheme });
      const complaints: string[] = [];
      const requests: string[] = [];
      page.on("console", (m) => {
        if (m.type() === "error" || m.type() === "warning") complaints.push(m.text());
      });
      page.on("pageerror", (e) => complaints.push(e.message));
      page.on("request", (r) => {
        if (r.url() !== url) requests.push(r.url());
      });
      await page.goto(url);
      return { page, complaints, requests };
    };
    tests({
      visit,
      open(html, look) {
        const file = join(folder, `${files++}.html`);
        writeFileSync(file, html);
        return visit(pathToFileURL(file).href, look);
      },
    });
  });
}
