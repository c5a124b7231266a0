// One axis, many lanes: chosen, resized, remembered; the cursor by finger; zoom by wheel, pinch and double tap; every
// plot taken away as SVG, PNG and CSV.
import { By, Key, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, press, text, until } from "./support/hand";
import { fromFile, load } from "./support/page";
import { afresh } from "./support/speed";

describe.each(engines)("lanes in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
  });
  afterAll(() => driver?.quit());
  beforeEach(() => afresh(driver));

  const lanes = (): Promise<string[]> => driver.executeScript("return [...document.querySelectorAll('.lanes-box .lane')].map((lane) => lane.dataset.lane)");
  const height = (lane: string): Promise<number> => driver.executeScript("return document.querySelector(`[data-lane='${arguments[0]}'] canvas`).getBoundingClientRect().height", lane);
  const again = async (): Promise<void> => {
    await load(driver, fromFile);
    await until(driver, "no lanes", "return document.querySelectorAll('.lanes-box canvas').length > 0 && document.querySelector('.read-out dd') !== null");
  };
  /** Length of the axis, from what is said of it, MeV. */
  const span = async (): Promise<number> => {
    const [, from, to] = /between ([\d.]+) and ([\d.]+)/.exec(await driver.executeScript<string>("return document.querySelector('.lanes-foot summary').textContent")) ?? [];
    return Number(to) - Number(from);
  };
  /** Fingers on the lanes: [kind, finger, share of the width]. */
  const fingers = (steps: readonly (readonly ["down" | "move" | "up", number, number])[]): Promise<void> =>
    driver.executeScript(
      `const box = document.querySelector('.lanes-box');
       const { left, top, width } = box.getBoundingClientRect();
       for (const [kind, pointerId, share] of arguments[0]) {
         box.dispatchEvent(new PointerEvent('pointer' + kind, { pointerId, pointerType: 'touch', isPrimary: pointerId === 1, bubbles: true, cancelable: true, clientX: left + share * width, clientY: top + 60 }));
       }`,
      steps,
    );

  it("are taken away and brought back, and that is remembered", async () => {
    expect(await lanes()).toEqual(["line-shape", "pulls", "beam-time"]);
    await press(driver, "Lanes");
    await driver.findElement(By.xpath("//div[@class='lane-choice']//label[contains(., 'Residuals')]/input")).click();
    expect(await lanes()).toEqual(["line-shape", "beam-time"]);
    await again();
    expect(await lanes()).toEqual(["line-shape", "beam-time"]);
    await press(driver, "Lanes");
    await press(driver, "As at first");
    expect(await lanes()).toEqual(["line-shape", "pulls", "beam-time"]);
  });

  it("are made higher by the keyboard and by a drag, and that is remembered", async () => {
    const before = await height("pulls");
    const grip = await driver.findElement(By.css("[data-lane='pulls'] .grip"));
    await driver.executeScript("arguments[0].focus()", grip);
    await grip.sendKeys(Key.ARROW_DOWN, Key.ARROW_DOWN);
    await driver.wait(async () => (await height("pulls")) === before + 32, 5000, "the keys did nothing");
    await driver.executeScript("arguments[0].scrollIntoView({ block: 'center' })", grip);
    await driver.actions().move({ origin: grip }).press().move({ origin: grip, y: 40 }).release().perform();
    await driver.wait(async () => (await height("pulls")) > before + 60, 5000, "the drag did nothing");
    const now = await height("pulls");
    await again();
    expect(await height("pulls")).toBe(now);
    const there = await driver.findElement(By.css("[data-lane='pulls'] .grip"));
    await driver.executeScript("arguments[0].focus()", there);
    await there.sendKeys(Key.HOME);
    await driver.wait(async () => (await height("pulls")) === before, 5000, "it did not go back");
  });

  it("follow a finger, two fingers, a double tap and the wheel", async () => {
    const read = await text(driver, ".read-out");
    await fingers([["down", 1, 0.3], ["move", 1, 0.4], ["up", 1, 0.4]]);
    await until(driver, "the cursor did not follow the finger", "return document.querySelector('.read-out').innerText !== arguments[0]", read);
    const whole = await span();
    await fingers([["down", 1, 0.4], ["down", 2, 0.6], ["move", 1, 0.3], ["move", 2, 0.7], ["up", 1, 0.3], ["up", 2, 0.7]]);
    await driver.wait(async () => (await span()) < 0.7 * whole, 5000, "the pinch did not zoom");
    await fingers([["down", 1, 0.5], ["up", 1, 0.5], ["down", 1, 0.5], ["up", 1, 0.5]]);
    await driver.wait(async () => (await span()) >= whole, 5000, "the double tap did not show the whole");
    const zoomed = await span();
    await driver.executeScript(`
      const box = document.querySelector('.lanes-box');
      const { left, top, width } = box.getBoundingClientRect();
      box.dispatchEvent(new WheelEvent('wheel', { deltaY: -60, bubbles: true, cancelable: true, clientX: left + width / 2, clientY: top + 60 }));`);
    await driver.wait(async () => (await span()) < zoomed, 5000, "the wheel did not zoom");
  });

  it("say at the cursor what each of them knows", async () => {
    const cursor = await driver.findElement(By.css(".cursor"));
    await driver.executeScript("arguments[0].focus()", cursor);
    await cursor.sendKeys(Key.ARROW_DOWN);
    await press(driver, "More");
    await until(driver, "the lanes are silent", "return /residual of A\\\\d+/.test(document.querySelector('.read-out-more').innerText) && /time spent here/.test(document.querySelector('.read-out-more').innerText)".replaceAll("\\\\", "\\"));
    for (const what of ["radiation factor", "slope of the observed curve", "signal rate"]) expect(await text(driver, ".read-out-more")).toContain(what);
  });

  it("are tables too", async () => {
    const open = async (selector: string, index: number): Promise<void> => {
      await driver.executeScript("const one = document.querySelectorAll(arguments[0])[arguments[1]]; one.scrollIntoView({ block: 'center' }); one.click()", selector, index);
    };
    await open(".lanes-foot summary", 0);
    await until(driver, "no tables", "return document.querySelectorAll('.lane-table summary').length === 3");
    await open(".lane-table summary", 1);
    await until(driver, "no numbers", "return document.querySelectorAll('.lane-table details[open] tbody tr').length > 5");
  });

  it("are taken away as SVG, PNG and CSV", async () => {
    // What would be saved, kept instead.
    await driver.executeScript("window.saved = []; const make = URL.createObjectURL; URL.createObjectURL = (blob) => { window.saved.push(blob); return make(blob); }; HTMLAnchorElement.prototype.click = () => undefined;");
    await enter(driver, "Sheet");
    await press(driver, "Plot, SVG");
    await press(driver, "Plot, PNG");
    await press(driver, "Curve, CSV");
    await until(driver, "not three files", "return window.saved.length === 3");
    const kinds = await driver.executeScript<string[]>("return window.saved.map((blob) => blob.type).sort()");
    expect(kinds).toEqual(["image/png", "image/svg+xml", "text/csv"]);
    const drawn = await driver.executeAsyncScript<{ wrong: boolean; paths: number; words: string }>(`
      const done = arguments[0];
      window.saved.find((blob) => blob.type === 'image/svg+xml').text().then((text) => {
        const svg = new DOMParser().parseFromString(text, 'image/svg+xml');
        done({ wrong: svg.querySelector('parsererror') !== null, paths: svg.querySelectorAll('path').length, words: svg.documentElement.textContent });
      });`);
    expect(drawn.wrong).toBe(false);
    expect(drawn.paths).toBeGreaterThan(20);
    for (const word of ["Saltmere", "invented", "Cross section (nb)", "Residuals (errors)", "W (MeV)", "Observed"]) expect(drawn.words).toContain(word);
    const csv = await driver.executeAsyncScript<string>("const done = arguments[0]; window.saved.find((blob) => blob.type === 'text/csv').text().then(done)");
    expect(csv.split("\r\n").length).toBeGreaterThan(50);
    const bytes = await driver.executeScript<number>("return window.saved.find((blob) => blob.type === 'image/png').size");
    expect(bytes).toBeGreaterThan(5000);
  });
});
