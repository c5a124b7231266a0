// What the fit can be asked beyond its minimum, on the invented example: intervals, other solutions, trials.
import { By, type WebDriver, type WebElement } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { button, enter, field, press, settled, text, type } from "./support/hand";
import { fromFile, load } from "./support/page";

/** These are long studies, on a machine that may be busy. */
const PATIENCE_MS = 120_000;

describe.each(engines)("the fit room in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Fit");
  });
  afterAll(() => driver?.quit());

  const cells = (table: string) =>
    driver.executeScript<string[][]>(
      "return [...document.querySelectorAll(arguments[0] + ' tbody tr')].map((row) => [...row.cells].map((cell) => cell.innerText))",
      table,
    );
  const appears = (selector: string) =>
    driver.wait(async () => (await text(driver, selector)) !== "", PATIENCE_MS, `${selector} did not appear`);
  const near = (value: string | undefined) => Number.parseFloat((value ?? "").replace("−", "-"));

  it(
    "gives profile intervals on both sides of every parameter",
    async () => {
      await press(driver, "Intervals");
      await appears(".intervals tbody");
      const rows = await cells(".intervals");
      expect(rows.length).toBeGreaterThan(1);
      expect(rows[0]?.[1]).toMatch(/^28\d\d\.\d/);
      for (const row of rows) expect(row[3]).toMatch(/\d/);
    },
    PATIENCE_MS,
  );

  it(
    "puts the second solution beside the first and takes it as the hypothesis in one step",
    async () => {
      await press(driver, "Solutions");
      await appears(".solutions tbody");
      const rows = await cells(".solutions");
      const strength = rows.find((row) => /Γin·Bf/.test((row[0] ?? "").replace(/\s/g, ""))) ?? [];
      // Scenario of the demo: the constructed second solution has a strength near 14.9 eV.
      const values = strength.slice(1).map(near);
      const at = values.findIndex((value) => Math.abs(value - 14.9) < 1);
      expect(values.length).toBeGreaterThan(1);
      expect(at, `strengths: ${values.join(", ")}`).toBeGreaterThanOrEqual(0);
      const above = rows.find((row) => /2 NLL/.test(row[0] ?? "")) ?? [];
      expect(Math.abs(near(above[at + 1]))).toBeLessThan(0.5);

      await press(driver, `Use as the hypothesis: solution ${at + 1}`);
      await enter(driver, "Model");
      const taken = await (await field(driver, "model.resonances[0].strength.value")).getAttribute("value");
      expect(near(taken ?? "")).toBeCloseTo(values[at] ?? 0, 0);
      await driver.findElement(By.css("button[aria-label^='Undo']")).click();
      const back = await (await field(driver, "model.resonances[0].strength.value")).getAttribute("value");
      expect(back).not.toBe(taken);
      await enter(driver, "Fit");
    },
    PATIENCE_MS,
  );

  it(
    "runs forty trials and tells bias, pulls and coverage",
    async () => {
      const count = await driver.executeScript<string>(
        "return [...document.querySelectorAll('label')].find((label) => label.innerText === 'Number of trials').htmlFor",
      );
      await type(driver, (await driver.findElement(By.id(count))) as WebElement, "40");
      await press(driver, "Run trials");
      await appears(".trials tbody");
      const rows = await cells(".trials");
      for (const row of rows) {
        expect(row[2]).toMatch(/\d\.\d\d ±/);
        expect(near(row[3])).toBeGreaterThan(0.5);
        expect(near(row[3])).toBeLessThan(1.6);
        expect(row[4]).toMatch(/\d+\.\d\s?% \(\d+\.\d to \d+\.\d\)/);
      }
    },
    PATIENCE_MS,
  );

  it("stops trials when told to, and can run again", async () => {
    await press(driver, "Run trials");
    await press(driver, "Cancel");
    await driver.wait(async () => (await button(driver, "Run trials")).isEnabled(), 15_000, "it did not stop");
    expect(await text(driver, "progress")).toBe("");
  });
});
