import { join } from "node:path";
import type { Bench } from "../cases.js";

/** How long after a save the live page has the new picture. */
export const watch: Bench = {
  name: "watch",
  says: "from a save (by renaming) to the new picture on the live page's stream, medians of 15",
  async *plan({ root, work, own }) {
    const documents = ["networks/demo/both.yaml", "networks/demo/salt-normal.yaml", "networks/demo/study.yaml"];
    yield {
      title: "redraw after a save",
      target: "under 200 ms",
      rounds: 3,
      limit: 60,
      contestants: documents.map((file, k) => ({
        name: `watch ${file}`,
        own: true,
        command: own("watch", root, join(work, `watch-${k}`), file),
      })),
    };
  },
};
