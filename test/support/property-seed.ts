import fc from "fast-check";

// The same cases each time, so that a change is judged by what it changed. Other cases: PROPERTY_SEED=7 npm test.
fc.configureGlobal({ seed: Number(process.env.PROPERTY_SEED ?? 1) });
