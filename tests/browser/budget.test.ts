// Budgets of the built file: its size, and the time to the first curve beside that of an empty page, so
// that the machine's speed drops out.
import { mkdtempSync, statSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { EMPTY, file, firstPlot, fromFile } from "./support/page";

const MOST_BYTES = 1_200_000;
/** One measurement, on a busy machine: 17 in Chromium, unpacking and compiling the engine included; what is more has a reason. */
const MOST_RATIO = 40;

it("has at most 1.2 MB", () => {
  expect(statSync(file).size).toBeLessThanOrEqual(MOST_BYTES);
});

describe.each(engines)("%s", (engine) => {
  it("draws the first curve soon after an empty page would", async () => {
    const empty = join(mkdtempSync(join(tmpdir(), "widthwise-")), "empty.html");
    writeFileSync(empty, EMPTY);
    const driver = await open(engine);
    try {
      await firstPlot(driver, fromFile, 1);
      const least = await firstPlot(driver, pathToFileURL(empty).href, 5);
      const ours = await firstPlot(driver, fromFile, 5);
      console.log(`first curve ${ours.toFixed(0)} ms, empty page ${least.toFixed(0)} ms, ratio ${(ours / least).toFixed(1)}`);
      expect(ours / least).toBeLessThan(MOST_RATIO);
    } finally {
      await driver.quit();
    }
  }, 120_000);
});
