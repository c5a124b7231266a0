// Times requests through the page's worker, as a person's browser runs them: reads
// WIDTHWISE_REQUESTS (a list of { name, request }), writes WIDTHWISE_OUT (lines "name TAB milliseconds").
import { readFileSync, writeFileSync } from "node:fs";
import { expect, it } from "vitest";
import { open } from "../support/engines";
import { fromFile, inPage, load } from "../support/page";

const file = (name: string): string => {
  const path = process.env[name];
  if (!path) throw new Error(`${name} is not set`);
  return path;
};

it("times the requests", async () => {
  const requests = JSON.parse(readFileSync(file("WIDTHWISE_REQUESTS"), "utf8")) as { name: string; request: unknown }[];
  const driver = await open("chromium");
  const times: Record<string, number> = {};
  try {
    await load(driver, fromFile);
    times["start-up"] = await driver.executeScript<number>("return performance.getEntriesByName('first-plot')[0]?.startTime ?? -1");
    for (const { name, request } of requests) {
      times[name] = await inPage<number>(
        driver,
        // One worker alone is asked, so that no second instance warms up in between.
        `const taken = [];
         const until = performance.now() + 3000;
         while (taken.length < 7 || (performance.now() < until && taken.length < 200)) {
           const start = performance.now();
           await pool.run(values[0]);
           taken.push(performance.now() - start);
         }
         taken.sort((a, b) => a - b);
         return taken[taken.length >> 1];`,
        request,
      );
    }
  } finally {
    await driver.quit();
  }
  writeFileSync(file("WIDTHWISE_OUT"), Object.entries(times).map((pair) => `${pair.join("\t")}\n`).join(""));
  expect(Object.keys(times).length).toBe(requests.length + 1);
});
