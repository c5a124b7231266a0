// Times requests through the page's worker, as a person's browser runs them: reads
// WIDTHWISE_REQUESTS (a list of { name, request }), writes WIDTHWISE_OUT (lines "name TAB milliseconds").
import { readFileSync, writeFileSync } from "node:fs";
import { By } from "selenium-webdriver";
import { expect, it } from "vitest";
import { open } from "../support/engines";
import { enter } from "../support/hand";
import { fromFile, inPage, load } from "../support/page";
import { afresh, longTasks, quantile, sliderToCurve, tenThousand, watchLongTasks } from "../support/speed";

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
    // The speed of the page itself first, as a person meets it.
    await afresh(driver);
    await watchLongTasks(driver);
    await driver.sleep(1500);
    await longTasks(driver);
    await enter(driver, "Model");
    const slider = await driver.findElement(By.css("input[type=range][aria-label^='Width']"));
    await sliderToCurve(driver, slider);
    await longTasks(driver);
    times["page: slider to redrawn curve, 95 %"] = quantile(await sliderToCurve(driver, slider), 0.95);
    times["page: longest task while it is dragged (0: none over 50 ms)"] = Math.max(0, ...(await longTasks(driver)));
    const { read, plotted } = await tenThousand(driver);
    times["page: 10,000 points read"] = read;
    times["page: 10,000 points plotted"] = plotted;
    await driver.get("about:blank");
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
  expect(Object.keys(times).length).toBe(requests.length + 5);
});
