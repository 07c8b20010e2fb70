import { expect, test } from "vitest";
import { backmix } from "../cli/fake.js";
import { describeInBrowser } from "./browser.js";
import { faintWords } from "./contrast.js";

describeInBrowser("a drawing's own page in a browser", ({ open }) => {
  test.each(["light", "dark"] as const)("%s: readable words, no complaints, no sideways scrolling", async (scheme) => {
    const args = ["draw", "networks/demo/bypass.yaml", "--compare", "networks/demo/both.yaml", "-o", "x.html"];
    const { written } = await backmix(args);
    const { page, complaints, requests } = await open(written.get("x.html") ?? "", { scheme, width: 360 });
    expect(await page.title()).toContain("R-12");
    expect(await faintWords(page)).toEqual([]);
    expect(await page.evaluate<number>("document.documentElement.scrollWidth")).toBeLessThanOrEqual(360);
    expect(complaints).toEqual([]);
    expect(requests).toEqual([]);
  });
});
