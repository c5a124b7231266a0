// A table from a spreadsheet: shown as understood, asked about where unclear, and only then counted.
import { By, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { press, text, until } from "./support/hand";
import { afresh } from "./support/speed";

/** Puts text into the dialog as a paste does: all at once. */
async function paste(driver: WebDriver, content: string): Promise<void> {
  await press(driver, "Paste or load");
  await driver.executeScript(
    `const box = document.querySelector('#paste-text');
     box.value = arguments[0];
     box.dispatchEvent(new Event('input', { bubbles: true }));`,
    content,
  );
}

const rows = (driver: WebDriver) => driver.executeScript<number>("return Number(document.querySelector('table.data').getAttribute('aria-rowcount')) - 1");

describe.each(engines)("pasting a table in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
  });
  afterAll(() => driver?.quit());
  beforeEach(async () => {
    await afresh(driver);
  });

  it("shows how each column was understood, then adds the rows", async () => {
    const before = await rows(driver);
    await paste(driver, "id\tW (MeV)\tL (nb^-1)\tn\nX1\t2873.2\t129.6\t298\nX2\t2874.2\t97.2\t587\n");
    await until(driver, "nothing understood", "return /2 rows/.test(document.querySelector('dialog caption')?.innerText ?? '')");
    expect(await rows(driver)).toBe(before);
    expect(await text(driver, "dialog tbody")).toMatch(/luminosity/);
    await press(driver, "Add 2 rows");
    await until(driver, "no new rows", "return Number(document.querySelector('table.data').getAttribute('aria-rowcount')) - 1 === arguments[0]", before + 2);
  });

  it("asks whether a bare E is the beam's energy or W", async () => {
    const before = await rows(driver);
    await paste(driver, "E (MeV)\tL (nb^-1)\tn\n2873.2\t129.6\t298\n");
    await until(driver, "no question", "return document.querySelector('dialog tbody select') !== null");
    expect(await driver.executeScript("return [...document.querySelectorAll('dialog .button')].every((button) => button.disabled)")).toBe(true);
    const answers = await driver.findElements(By.css("dialog tbody select option:not([value=''])"));
    expect(answers.length).toBeGreaterThanOrEqual(2);
    await answers[0]?.click();
    await until(driver, "the answer did not count", "return [...document.querySelectorAll('dialog .button-main')].some((button) => !button.disabled)");
    await press(driver, "Add 1 row");
    await until(driver, "no new row", "return Number(document.querySelector('table.data').getAttribute('aria-rowcount')) - 1 === arguments[0]", before + 1);
  });

  it("says that nothing differs when the same table is read again", async () => {
    const table = "id\tW (MeV)\tL (nb^-1)\tn\nX1\t2873.2\t129.6\t298\n";
    await paste(driver, table);
    await until(driver, "not understood", "return [...document.querySelectorAll('dialog .button-main')].some((button) => !button.disabled)");
    await press(driver, "Add 1 row");
    await until(driver, "the dialog stayed", "return document.querySelector('dialog[open]') === null");
    await paste(driver, table);
    await until(driver, "it does not say so", "return document.querySelector('dialog .button-main').innerText === 'Nothing differs'");
    expect(await driver.executeScript("return document.querySelector('dialog .button-main').disabled")).toBe(true);
  });

  it("says what is wrong with a cell and keeps what was pasted", async () => {
    await paste(driver, "W (MeV)\tL (nb^-1)\tn\n2873.2\tmany\t298\n");
    await until(driver, "no message", "return document.querySelector('dialog .problem')?.innerText.length > 0");
    expect(await driver.executeScript("return document.querySelector('#paste-text').value")).toContain("many");
  });
});
