// Everyone: axe-core in every room, theme and two widths; the keyboard alone; targets for fingers.
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { By, Key, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, press, settled, until } from "./support/hand";
import { fromFile, load } from "./support/page";

const axe = readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");
const ROOMS = ["Shift", "Beam", "Model", "Detection", "Fit", "Plan", "Look up", "Sheet"];

async function violations(driver: WebDriver): Promise<string[]> {
  return driver.executeAsyncScript<string[]>(`
    const done = arguments[arguments.length - 1];
    axe.run(document, { runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'] }).then(
      (result) => done(result.violations.flatMap((rule) => rule.nodes.map((node) => rule.id + ' ' + node.target.join(' ')))),
      (error) => done([String(error)]));`);
}

describe.each(engines)("for everyone in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await load(driver, fromFile);
    await settled(driver);
    await driver.executeScript(axe);
  });
  afterAll(() => driver?.quit());

  it.each([
    ["light", 1280],
    ["dark", 420],
    ["dim", 820],
  ] as const)("is clean in %s at %i px, every room", async (theme, width) => {
    await driver.manage().window().setRect({ width, height: 900 });
    await driver.findElement(By.css(`#theme option[value="${theme}"]`)).click();
    const found: string[] = [];
    for (const room of ROOMS) {
      await enter(driver, room);
      await driver.executeScript("for (const part of document.querySelectorAll('details')) part.open = true");
      // From the top: a bar that stays in view covers what is scrolled under it, which is no small target.
      await driver.executeScript("scrollTo(0, 0)");
      for (const violation of await violations(driver)) found.push(`${room}: ${violation}`);
    }
    expect(found).toEqual([]);
  });

  it("is clean in its dialogs", async () => {
    await driver.manage().window().setRect({ width: 1280, height: 900 });
    await press(driver, "Paste or load");
    expect(await violations(driver)).toEqual([]);
    await driver.findElement(By.css("dialog[open]")).sendKeys(Key.ESCAPE);
    await until(driver, "the dialog stayed", "return document.querySelector('dialog[open]') === null");
    await enter(driver, "Sheet");
    await press(driver, "Hand-over page");
    await until(driver, "no paper", "return document.querySelectorAll('.paper canvas').length === 3");
    expect(await violations(driver)).toEqual([]);
    await driver.findElement(By.css("dialog[open]")).sendKeys(Key.ESCAPE);
  });

  it("reaches every control of a room with the Tab key", async () => {
    await enter(driver, "Beam");
    await driver.executeScript("document.querySelector('.doors button').focus()");
    const wanted = await driver.executeScript<number>("return document.querySelectorAll('.room input, .room select, .room button').length");
    const seen = new Set<string>();
    for (let i = 0; i < wanted + 20; i += 1) {
      const here = await driver.switchTo().activeElement();
      await here.sendKeys(Key.TAB);
      const id = await driver.executeScript<string>("const here = document.activeElement; return here.closest('.room') ? [...document.querySelectorAll('.room input, .room select, .room button')].indexOf(here) + '' : ''");
      if (id !== "") seen.add(id);
    }
    expect(seen.size).toBe(wanted);
  });
});
