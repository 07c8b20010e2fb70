import fc from "fast-check";

/** Property tests draw the same cases on every machine; another seed tries others: `SEED=7 npx vitest run`. */
fc.configureGlobal({ seed: Number(process.env.SEED ?? 20261201) });
