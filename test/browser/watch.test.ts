import { copyFileSync, mkdtempSync, readFileSync, renameSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, expect, test } from "vitest";
import { files } from "../../src/cli/io.js";
import { startWatching, type Watching } from "../../src/cli/watch/watching.js";
import { describeInBrowser } from "./browser.js";
import { faintWords } from "./contrast.js";

const demo = "networks/demo";
const names = "both.yaml salt-normal.yaml salt-normal.csv".split(" ");

describeInBrowser("the watch page in a browser", ({ visit }) => {
  const folder = mkdtempSync(join(tmpdir(), "backmix-watch-"));
  const sound = readFileSync("networks/tour/corner.yaml", "utf8");
  let watching: Watching;

  beforeAll(async () => {
    for (const name of names) copyFileSync(join(demo, name), join(folder, name));
    writeFileSync(join(folder, "corner.yaml"), sound);
    copyFileSync("shared/chemistry/consecutive.yaml", join(folder, "consecutive.yaml"));
    const options = { cwd: folder, port: 0, allowOutside: false, clock: () => new Date(2026, 0, 1, 12, 0, 0) };
    const watched = ["corner.yaml", "salt-normal.yaml", "consecutive.yaml"];
    watching = await startWatching(watched, files(folder), options);
  });
  afterAll(async () => {
    await watching.close();
    rmSync(folder, { recursive: true });
  });

  test.each(["light", "dark"] as const)("shows every file, %s, without complaints", async (scheme) => {
    const { page, complaints, requests } = await visit(watching.url, { scheme });
    await page.locator("#file-2 figure").first().waitFor();
    for (const file of [0, 1, 2]) expect(await page.locator(`#file-${file} figure svg`).count()).toBeGreaterThan(0);
    expect(await page.locator("#file-0 h2").textContent()).toBe("Test tank with a quiet corner");
    expect(await page.locator("#file-0 .state").textContent()).toContain("corner.yaml, read at 12:00:00: sound");
    expect(await page.locator("#file-1 figcaption").allTextContents()).toEqual(
      expect.arrayContaining([expect.stringContaining("salt-normal.csv")]),
    );
    expect(await page.locator("#link").textContent()).toBe("live");
    expect(await faintWords(page)).toEqual([]);
    expect(complaints).toEqual([]);
    expect(requests.filter((r) => !r.startsWith(watching.url) && !r.startsWith("data:"))).toEqual([]);
  });

  test("follows saves, keeps the last good picture of a broken file and shows the fault with its line", async () => {
    const { page } = await visit(watching.url);
    const state = page.locator("#file-0 .state");
    const drawing = page.locator("#file-0 figure svg").first();
    await drawing.waitFor();
    const before = await drawing.innerHTML();

    writeFileSync(join(folder, "corner.yaml"), sound.replace("to: drain", "to: drane"));
    await page.locator("#file-0 .broken").waitFor();
    const problem = await page.locator("#file-0 .problems").textContent();
    const line = sound.split("\n").findIndex((l) => l.includes("to: drain")) + 1;
    expect(problem).toContain(`corner.yaml:${line}:`);
    expect(problem).toContain("drane");
    expect(problem).toContain("fix:");
    expect(await faintWords(page)).toEqual([]);
    expect(await state.textContent()).toContain("The pictures are those of 12:00:00");
    expect(await drawing.innerHTML()).toBe(before);

    // As many editors save: a new file takes the old one's name.
    writeFileSync(join(folder, "corner.yaml~"), sound.replace("Test tank", "Tall tank"));
    renameSync(join(folder, "corner.yaml~"), join(folder, "corner.yaml"));
    await page.getByRole("heading", { name: "Tall tank with a quiet corner" }).waitFor();
    expect(await page.locator("#file-0 .problems").count()).toBe(0);
    expect(await drawing.innerHTML()).not.toBe(before);

    // A second save by renaming, and one by removing and writing anew.
    writeFileSync(join(folder, "corner.yaml~"), sound.replace("Test tank", "Wide tank"));
    renameSync(join(folder, "corner.yaml~"), join(folder, "corner.yaml"));
    await page.getByRole("heading", { name: "Wide tank with a quiet corner" }).waitFor();
    rmSync(join(folder, "corner.yaml"));
    writeFileSync(join(folder, "corner.yaml"), sound);
    await page.getByRole("heading", { name: "Test tank with a quiet corner" }).waitFor();
    expect(await page.locator("#file-0 .broken").count()).toBe(0);

    rmSync(join(folder, "corner.yaml"));
    await page.locator("#file-0 .broken").waitFor();
    expect(await page.locator("#file-0 .problems").textContent()).toContain("there is no file");
    writeFileSync(join(folder, "corner.yaml"), sound);
    await page.locator("#file-0 .broken").waitFor({ state: "detached" });
  });

  test("a change of a file that a document rests on redraws the document", async () => {
    const { page } = await visit(watching.url);
    const caption = page.locator("#file-1 figcaption").first();
    await caption.waitFor();
    const rows = readFileSync(join(folder, "salt-normal.csv"), "utf8").trimEnd().split("\n");
    const count = Number(/^(\d+) readings/.exec((await caption.textContent()) ?? "")?.[1]);
    writeFileSync(join(folder, "salt-normal.csv"), `${rows.slice(0, -10).join("\n")}\n`);
    await page.getByText(`${count - 10} readings at`).waitFor();
    expect(await page.locator("#file-1 .broken").count()).toBe(0);
  });

  test("its curves are read and saved like those of a report", async () => {
    const { page } = await visit(watching.url);
    const pulse = page.locator("#figure-corner-pulse");
    await pulse.locator(".drawing").focus();
    await page.keyboard.press("Home");
    expect(await pulse.locator(".told").textContent()).toContain("time 0 min: drain 0.1");
    expect(await pulse.getByRole("button").count()).toBe(2);
  });

  test("answers nobody who calls it by another name", async () => {
    const { port } = new URL(watching.url);
    const asked = (host: string, method = "GET"): Promise<number> => status(Number(port), host, method);
    expect(await asked(`127.0.0.1:${port}`)).toBe(200);
    expect(await asked(`localhost:${port}`)).toBe(200);
    expect(await asked(`elsewhere.example:${port}`)).toBe(403);
    expect(await asked(`127.0.0.1:${port}`, "POST")).toBe(405);
  });
});

async function status(port: number, host: string, method: string): Promise<number> {
  const { request } = await import("node:http");
  return new Promise((done, failed) => {
    request({ port, host: "127.0.0.1", method, path: "/", headers: { host } }, (r) => {
      r.resume();
      done(r.statusCode ?? 0);
    })
      .on("error", failed)
      .end();
  });
}
