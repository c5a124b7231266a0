// The golden set: 200 requests of every kind, drawn by seed (crates/fuzz). Natively and in this engine with four
// workers the answers are the same to the last bit, with one worker those of every fourth request (all of them
// would take minutes more in every run); they are compared with one another, never with a stored answer. WIDTHWISE_GOLDEN is the file with the native fingerprints.
import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { fingerprint } from "./support/hash";
import { fromFile, inPage, load } from "./support/page";

interface Golden {
  request: { kind: string };
  answered: boolean;
  print: string;
}

const golden = JSON.parse(readFileSync(process.env["WIDTHWISE_GOLDEN"] ?? "../../target/tmp/golden.json", "utf8")) as Golden[];

describe.each(engines)("%s", (engine) => {
  it("gives the native bits with one worker and with four", async () => {
    expect(golden.length).toBeGreaterThanOrEqual(200);
    const driver = await open(engine);
    try {
      await driver.manage().setTimeouts({ script: 800_000 });
      await load(driver, fromFile);
      for (const [workers, step] of [
        [4, 1],
        [1, 4],
      ] as const) {
        const asked = golden.filter((_, index) => index % step === 0);
        const prints = await inPage<string[]>(
          driver,
          `const print = (${fingerprint});
           const own = new pool.constructor(pool.module, pool.spawn, values[1]);
           const one = (request) => own.run(request).then(print, (error) => {
             if (error.refusal === undefined) throw error;
             return print(error.refusal);
           });
           try { return await Promise.all(values[0].map(one)); } finally { own.close(); }`,
          asked.map(({ request }) => request),
          workers,
        );
        const other = asked.flatMap(({ request, print }, index) => (print === prints[index] ? [] : [`${index} ${request.kind}`]));
        expect(other, `answers that differ from the native ones with ${workers} workers`).toEqual([]);
      }
    } finally {
      await driver.quit();
    }
  }, 900_000);
});
