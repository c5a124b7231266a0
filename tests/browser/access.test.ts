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

  it("is clean with a running point, behind a number, and as an empty sheet", async () => {
    await enter(driver, "Shift");
    await driver.findElement(By.css(".data tbody tr:last-child button[aria-label$='is running']")).click();
    await until(driver, "no running point", "return document.querySelector('.entry input[name=n]') !== null");
    expect(await violations(driver)).toEqual([]);
    const why = await driver.findElement(By.css(".trio .why"));
    await driver.executeScript("arguments[0].scrollIntoView({ block: 'center' })", why);
    await why.click();
    await until(driver, "no explanation", "return document.querySelector('dialog[open] math') !== null && document.querySelector('dialog[open] .inputs') !== null");
    expect(await violations(driver)).toEqual([]);
    await driver.findElement(By.css("dialog[open]")).sendKeys(Key.ESCAPE);
    await enter(driver, "Sheet");
    await press(driver, "New sheet");
    await until(driver, "not empty", "return /Still needed/.test(document.querySelector('.stripe-place').innerText)");
    for (const room of ROOMS) {
      await enter(driver, room);
      await driver.executeScript("scrollTo(0, 0)");
      expect(await violations(driver)).toEqual([]);
    }
    await driver.findElement(By.css("body")).sendKeys(Key.chord(Key.CONTROL, "z"));
    await until(driver, "undo did nothing", "return !/Still needed/.test(document.querySelector('.stripe-place').innerText)");
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

/** What only Chromium can be told to be: a telephone, a page at twice its size, a person who wants no motion. */
describe.each(engines.filter((engine) => engine === "chromium"))("for hands and eyes in %s", (engine) => {
  let driver: WebDriver & { sendDevToolsCommand(name: string, values: object): Promise<void> };
  beforeAll(async () => {
    driver = (await open(engine)) as typeof driver;
  });
  afterAll(() => driver?.quit());

  const be = async (width: number, height: number, touch: boolean): Promise<void> => {
    await driver.sendDevToolsCommand("Emulation.setDeviceMetricsOverride", { width, height, deviceScaleFactor: 2, mobile: touch });
    await driver.sendDevToolsCommand("Emulation.setTouchEmulationEnabled", { enabled: touch });
    await load(driver, fromFile);
    await settled(driver);
  };
  const sideways = (): Promise<number> => driver.executeScript("return document.documentElement.scrollWidth - arguments[0]", 0);
  const everyRoom = async (look: (room: string) => Promise<void>): Promise<void> => {
    for (const room of ROOMS) {
      await driver.executeScript("[...document.querySelectorAll('.doors button')].find((door) => door.textContent === arguments[0]).click()", room);
      await driver.sleep(300);
      await driver.executeScript("for (const part of document.querySelectorAll('details')) part.open = true");
      await driver.sleep(200);
      await look(room);
    }
  };

  it.each([
    ["telephone", 390, 844],
    ["tablet", 820, 1180],
  ] as const)("has targets of 44 px and no line cut off on a %s", async (_name, width, height) => {
    await be(width, height, true);
    const small: string[] = [];
    await everyRoom(async (room) => {
      expect(await sideways(), room).toBeLessThanOrEqual(width);
      // Numbers that explain themselves stand within lines of text; a slider's or box's label is its target.
      const found = await driver.executeScript<string[]>(`
        return [...document.querySelectorAll('button, select, textarea, input, summary, label.button, [role=separator]')]
          .filter((one) => !one.matches('.why, .unseen, [type=checkbox]') && !one.closest('.unseen, dialog:not([open])'))
          .map((one) => [one, one.getBoundingClientRect()])
          .filter(([, box]) => box.width > 0 && (box.width < 43.5 || box.height < 43.5))
          .map(([one, box]) => one.tagName + ' ' + (one.getAttribute('aria-label') ?? one.textContent).trim() + ' ' + Math.round(box.width) + 'x' + Math.round(box.height));`);
      for (const one of found) small.push(`${room}: ${one}`);
    });
    expect(small).toEqual([]);
  });

  it("needs no scrolling sideways at 200 % on a desk", async () => {
    await be(640, 450, false);
    await everyRoom(async (room) => expect(await sideways(), room).toBeLessThanOrEqual(640));
  });

  it("keeps still for who wants no motion", async () => {
    await driver.sendDevToolsCommand("Emulation.setEmulatedMedia", { features: [{ name: "prefers-reduced-motion", value: "reduce" }] });
    await be(1280, 900, false);
    await everyRoom(async (room) => {
      expect(await driver.executeScript("return document.getAnimations().length"), room).toBe(0);
    });
  });
});
