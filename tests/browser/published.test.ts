// Published data through the page: the CMD-3 phi scan (Phys. Lett. B 760 (2016) 314, data in
// tests/reference), opened as a person would open a sheet, fitted by the engine in the browser.
import { readFileSync } from "node:fs";
import { resolve } from "node:path";
import { By, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, settled, until } from "./support/hand";
import { fromFile, inPage, load } from "./support/page";

const SHEET = resolve(import.meta.dirname, "../reference/sheets/cmd3_phi.json");

interface Fitted {
  kind: string;
  statistic: number;
  parameters: { id: string; value: number; error: number; unit: string }[];
}

describe.each(engines)("the published phi scan in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Sheet");
    const input = await driver.findElement(By.css("input[type=file][accept*=json]"));
    await input.sendKeys(SHEET);
    await until(driver, "the sheet did not open", "return !document.querySelector('.mark')");
    await settled(driver);
  });
  afterAll(() => driver?.quit());

  it("shows the fitted mass and width of the independent refit", async () => {
    // Independent refit: M = 1019.4556(84), Gamma = 4.2432(141) MeV; the page shows errors to two digits.
    await enter(driver, "Fit");
    await until(driver, "no fitted mass", "return document.querySelector('.room').innerText.includes('1019.45')");
    const shown = await driver.executeScript<string>("return document.querySelector('.room').innerText");
    expect(shown).toMatch(/1019\.45[56]/);
    expect(shown).toMatch(/4\.24[34]/);
  });

  it("agrees with the independent refit to 1 % of the errors", async () => {
    const body = await inPage<Fitted>(
      driver,
      `const opened = (await pool.run({ kind: 'open', text: values[0] })).body;
       return (await pool.run({ kind: 'fit', sheet: opened.sheet })).body;`,
      readFileSync(SHEET, "utf8"),
    );
    const wanted: Record<string, [number, number]> = { "r1.mass": [1019.4556, 0.0084], "r1.width": [4.2432, 0.0141] };
    for (const [id, [value, error]] of Object.entries(wanted)) {
      const found = body.parameters.find((parameter) => parameter.id === id);
      const mev = found?.unit === "GeV" ? 1000 : 1;
      // Printed digits end at 1e-4 MeV: half of it is added to 1 % of the error.
      expect(Math.abs((found?.value ?? 0) * mev - value)).toBeLessThan(0.01 * error + 5e-5);
      expect(Math.abs(((found?.error ?? 0) * mev) / error - 1)).toBeLessThan(0.02);
    }
    expect(Math.abs(body.statistic - 12.42)).toBeLessThan(0.02);
  });
});
