import type { Page } from "playwright-core";

/**
 * Words whose colour stands out from their ground by less than 4.5 : 1 (WCAG 2.1, W3C 2018, success criterion 1.4.3), as the
 * browser computes both. Words in a drawing stand on its paper, or on a plate.
 */
export const faintWords = (page: Page): Promise<string[]> =>
  page.evaluate<string[]>(String.raw`(() => {
    const numbers = (colour) => colour.match(/[\d.]+/g).map(Number);
    const channel = (v) => (v / 255 <= 0.04045 ? v / 255 / 12.92 : ((v / 255 + 0.055) / 1.055) ** 2.4);
    const luminance = ([r, g, b]) => 0.2126 * channel(r) + 0.7152 * channel(g) + 0.0722 * channel(b);
    const ground = (e) => {
      for (let at = e; at; at = at.parentElement) {
        const colour = getComputedStyle(at).backgroundColor;
        const [, , , alpha = 1] = numbers(colour);
        if (alpha > 0) return numbers(colour);
      }
      return [255, 255, 255];
    };
    const found = new Set();
    const walk = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
    for (let node = walk.nextNode(); node; node = walk.nextNode()) {
      const e = node.parentElement;
      if (!node.textContent.trim() || ["SCRIPT", "STYLE", "title", "desc"].includes(e.tagName)) continue;
      if (e.getClientRects().length === 0) continue;
      const drawing = e.closest("svg");
      const style = getComputedStyle(e);
      const words = numbers(drawing ? style.fill : style.color);
      const paper = drawing && drawing.querySelector("rect.paper");
      const under = paper ? numbers(getComputedStyle(paper).fill) : ground(e);
      const [low, high] = [luminance(words), luminance(under)].sort((a, b) => a - b);
      const ratio = (high + 0.05) / (low + 0.05);
      if (ratio < 4.5) found.add(e.tagName + "." + (e.getAttribute("class") || "") + " " + ratio.toFixed(2) + ": " + node.textContent.trim().slice(0, 40));
    }
    return [...found];
  })()`);
