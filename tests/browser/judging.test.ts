// Judging a fit in the page, on the invented example: nuisances, channels, hypotheses, time, looks, limits.
import { type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { button, enter, press, settled, text } from "./support/hand";
import { fromFile, load } from "./support/page";

/** These are long studies, on a machine that may be busy. */
const PATIENCE_MS = 180_000;

describe.each(engines)("judging a fit in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Fit");
  });
  afterAll(() => driver?.quit());

  const appears = (selector: string) =>
    driver.wait(async () => (await text(driver, selector)) !== "", PATIENCE_MS, `${selector} did not appear`);
  const cells = (table: string) =>
    driver.executeScript<string[][]>(
      "return [...document.querySelectorAll(arguments[0] + ' tbody tr')].map((row) => [...row.cells].map((cell) => cell.textContent))",
      table,
    );

  it("tells pull and impact of each nuisance, as table and picture", async () => {
    await appears(".results tbody");
    const rows = await cells(".nuisances");
    expect(rows.length).toBeGreaterThan(3);
    expect(rows.some((row) => /fill/.test(row[0] ?? ""))).toBe(true);
    for (const row of rows) expect(row[1]).toMatch(/[+−]\d+\.\d\d ± \d\.\d\d/);
    const pictured = await driver.executeScript<number>("return document.querySelectorAll('.plot-bar').length");
    expect(pictured).toBe(rows.length);
  });

  it(
    "tests the interference with pseudo-experiments where Wilks' theorem does not hold",
    async () => {
      await press(driver, "Compare");
      await appears(".compared");
      const told = await text(driver, ".compared");
      expect(told).toMatch(/likelihood ratio \d+/);
      expect(told).toMatch(/200 pseudo-experiments/);
      expect(told).toMatch(/Wilks' theorem does not hold/);
    },
    PATIENCE_MS,
  );

  it("refuses J without angular bins, with the reason", async () => {
    await driver.executeScript(
      "const s = [...document.querySelectorAll('select')].find((x) => [...x.options].some((o) => o.value === 'j2')); s.value = 'j2'; s.dispatchEvent(new Event('change', { bubbles: true }));",
    );
    await press(driver, "Compare");
    await driver.wait(async () => /\(2J\+1\)/.test(await text(driver, "main, body")), 20_000, "no reason");
  });

  it(
    "shows the estimates as they grew, and the chance of a good look",
    async () => {
      await press(driver, "Fit as it grew");
      await driver.wait(
        () => driver.executeScript<boolean>("return [...document.querySelectorAll('svg[aria-label^=\"Estimate of\"]')].length > 0"),
        PATIENCE_MS,
        "no plot",
      );
      await press(driver, "Chance in 24 looks");
      await appears(".looks");
      expect(await text(driver, ".looks")).toMatch(/7\.[89] % of days/);
    },
    PATIENCE_MS,
  );

  it(
    "fits a second exit channel that is typed in, and takes it away again",
    async () => {
      await press(driver, "Add an exit channel");
      await settled(driver);
      const ids = await driver.executeScript<string[]>(
        "return [...document.querySelectorAll('input[aria-label^=\"Counts of channel B at\"]')].map((x) => x.getAttribute('aria-label'))",
      );
      expect(ids.length).toBe(12);
      await driver.executeScript(
        "const all = [...document.querySelectorAll('input[aria-label^=\"Counts of channel B at\"]')]; const n = [98,60,53,108,298,404,587,574,650,344,215,185]; all.forEach((x, i) => { x.value = String(n[i]); x.dispatchEvent(new Event('input', { bubbles: true })); });",
      );
      await driver.executeScript(
        "const box = [...document.querySelectorAll('input[type=checkbox]')].find((x) => /Strength \\(channel B\\) free/.test(x.getAttribute('aria-label') ?? '')); box.click();",
      );
      await driver.wait(
        async () => (await cells(".results")).length === 6,
        60_000,
        "the channel's strength is not fitted",
      );
      await press(driver, "Remove channel B");
      await driver.wait(async () => (await cells(".results")).length === 5, 60_000, "it did not go");
      expect(await (await button(driver, "Add a thermometer")).isEnabled()).toBe(true);
    },
    PATIENCE_MS,
  );
});
