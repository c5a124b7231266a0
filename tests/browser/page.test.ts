// The page as it opens, and the axis with its one cursor: by mouse, by keyboard, zoomed and back.
import { By, Key, Origin, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, pixels, press, settled, text, until } from "./support/hand";
import { fromFile, load, outgoing } from "./support/page";

describe.each(engines)("the page in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
  });
  afterAll(() => driver?.quit());
  beforeEach(async () => {
    await load(driver, fromFile);
    await settled(driver);
  });

  it("opens on a finished example that says it is invented", async () => {
    expect(await text(driver, ".mark")).toContain("Invented");
    expect(await text(driver, ".data tbody")).not.toBe("");
    expect(await text(driver, ".cell-dial .figure")).toMatch(/\d/);
    expect(await outgoing(driver, fromFile)).toEqual([]);
  });

  it("draws the curve, not an empty frame", async () => {
    const colours = await driver.executeScript<number>(`
      const canvas = document.querySelector('[data-lane="line-shape"] canvas');
      const { data } = canvas.getContext('2d').getImageData(0, 0, canvas.width, canvas.height);
      const seen = new Set();
      for (let i = 0; i < data.length; i += 4) if (data[i + 3] > 200) seen.add(data[i] >> 4 << 8 | data[i + 1] >> 4 << 4 | data[i + 2] >> 4);
      return seen.size;`);
    expect(colours).toBeGreaterThan(5);
  });

  it("moves one cursor by the keyboard and reads everything out, the number to dial included", async () => {
    const cursor = await driver.findElement(By.css(".cursor"));
    await driver.executeScript("arguments[0].focus()", cursor);
    const before = await cursor.getAttribute("aria-valuetext");
    await cursor.sendKeys(Key.ARROW_LEFT, Key.ARROW_LEFT, Key.ARROW_LEFT);
    await until(driver, "the read-out did not follow", "return document.querySelector('.cursor').getAttribute('aria-valuetext') !== arguments[0]", before);
    expect(await cursor.getAttribute("aria-valuetext")).toMatch(/W [\d.]+ MeV, to dial [\d.]+ MeV, .*observed [\d.]+ nb/i);
  });

  it("moves the cursor with the mouse through all lanes", async () => {
    const lane = await driver.findElement(By.css('[data-lane="pulls"] .chart'));
    const before = await text(driver, ".read-out");
    await driver.actions().move({ origin: lane, x: 40, y: 0 }).perform();
    await until(driver, "the read-out did not follow", "return document.querySelector('.read-out').innerText !== arguments[0]", before);
  });

  it("zooms by a drag and shows the whole scan again", async () => {
    const lane = await driver.findElement(By.css('[data-lane="line-shape"] .chart'));
    const whole = await text(driver, ".lanes-foot summary");
    await driver.actions().move({ origin: lane, x: -60, y: 0 }).press().move({ origin: Origin.POINTER, x: 120, y: 0 }).release().perform();
    await until(driver, "the axis did not zoom", "return document.querySelector('.lanes-foot summary').innerText !== arguments[0]", whole);
    await driver.wait(async () => (await text(driver, ".lanes-foot summary")) !== whole, 5000);
    await press(driver, "Whole scan");
    await until(driver, "the whole scan did not come back", "return document.querySelectorAll('.outside').length === 0");
  });

  it("turns curves on and off from the legend", async () => {
    const before = await pixels(driver);
    await press(driver, "Born");
    await driver.wait(async () => (await pixels(driver)) !== before, 5000, "the Born curve did not appear");
  });

  it("has light, dark and dim", async () => {
    const paper = () => driver.executeScript<string>("return getComputedStyle(document.documentElement).getPropertyValue('--paper')");
    const seen = new Set<string>();
    for (const theme of ["light", "dark", "dim"]) {
      await driver.findElement(By.css(`#theme option[value="${theme}"]`)).click();
      await driver.sleep(50);
      seen.add(await paper());
    }
    expect(seen.size).toBe(3);
  });

  it("opens every room", async () => {
    for (const room of ["Beam", "Model", "Detection", "Fit", "Plan", "Look up", "Sheet", "Shift"]) {
      await enter(driver, room);
      expect(await text(driver, ".room")).not.toBe("");
    }
  });

  it.each([390, 820, 1280, 2560])("fits a window of %i px without scrolling sideways", async (width) => {
    await driver.manage().window().setRect({ width, height: 900 });
    await driver.sleep(200);
    const [scroll, inner] = await driver.executeScript<[number, number]>("return [document.documentElement.scrollWidth, document.documentElement.clientWidth]");
    expect(scroll).toBeLessThanOrEqual(inner);
    await driver.manage().window().setRect({ width: 1280, height: 900 });
  });
});
