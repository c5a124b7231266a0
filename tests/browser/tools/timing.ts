// Times requests through the page's worker, as a person's browser runs them: reads
// WIDTHWISE_REQUESTS (a sheet and a list of { name, patch, request }), writes WIDTHWISE_OUT (lines "name TAB milliseconds").
import { readFileSync, writeFileSync } from "node:fs";
import { pathToFileURL } from "node:url";
import { By } from "selenium-webdriver";
import { expect, it } from "vitest";
import { open } from "../support/engines";
import { enter } from "../support/hand";
import { EMPTY, firstPlot, fromFile, inPage, load } from "../support/page";
import { afresh, longTasks, quantile, sliderToCurve, tenThousand, watchLongTasks } from "../support/speed";

const file = (name: string): string => {
  const path = process.env[name];
  if (!path) throw new Error(`${name} is not set`);
  return path;
};

interface Timed {
  name: string;
  patch?: object;
  /** Problems solved by one request. */
  times?: number;
  request: object;
}

/** A copy changed by a patch (RFC 7396). */
function merged(into: unknown, patch: unknown): unknown {
  if (typeof patch !== "object" || patch === null || Array.isArray(patch)) return patch;
  const fields: Record<string, unknown> = { ...(into as object) };
  for (const [key, inner] of Object.entries(patch)) fields[key] = merged(fields[key], inner);
  return fields;
}

it("times the requests", async () => {
  const { sheet, requests } = JSON.parse(readFileSync(file("WIDTHWISE_REQUESTS"), "utf8")) as { sheet: object; requests: Timed[] };
  const empty = `${file("WIDTHWISE_OUT")}.html`;
  writeFileSync(empty, EMPTY);
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
    times["empty page"] = await firstPlot(driver, pathToFileURL(empty).href, 7);
    times["start-up"] = await firstPlot(driver, fromFile, 7);
    await load(driver, fromFile);
    for (const { name, patch = {}, times: problems = 1, request } of requests) {
      const taken = await inPage<number>(
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
        { ...request, sheet: merged(sheet, patch) },
      );
      times[name] = taken / problems;
    }
  } finally {
    await driver.quit();
  }
  writeFileSync(file("WIDTHWISE_OUT"), Object.entries(times).map((pair) => `${pair.join("\t")}\n`).join(""));
  expect(Object.keys(times).length).toBe(requests.length + 6);
});
