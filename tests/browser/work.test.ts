// The work of a shift: type, slide, enter, repair; nothing typed is lost, everything can be taken back.
import { By, Key, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, field, pixels, press, settled, text, type, until } from "./support/hand";
import { fromFile, load } from "./support/page";

describe.each(engines)("working at it in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
  });
  afterAll(() => driver?.quit());
  beforeEach(async () => {
    await driver.get("about:blank");
    await load(driver, `${fromFile}?fresh`);
    await driver.executeAsyncScript("const done = arguments[0]; const all = indexedDB.deleteDatabase('widthwise'); all.onsuccess = all.onerror = all.onblocked = () => done(); localStorage.clear();");
    await load(driver, fromFile);
    await settled(driver);
  });

  it("names what is wrong with a field and what is allowed, and keeps what was typed", async () => {
    await enter(driver, "Model");
    const width = await field(driver, "model.resonances[0].width");
    await type(driver, width, "-1 MeV");
    await until(driver, "no message", "return document.querySelector('.field .problem')?.innerText.length > 0");
    expect(await width.getAttribute("aria-invalid")).toBe("true");
    expect(await width.getAttribute("value")).toBe("-1 MeV");
    expect(await (await field(driver, "model.resonances[0].mass")).getAttribute("value")).not.toBe("");
    expect(await text(driver, ".stripe")).not.toBe("");
  });

  it("takes back and does again, by button and by key", async () => {
    await enter(driver, "Model");
    const width = await field(driver, "model.resonances[0].width");
    const before = await width.getAttribute("value");
    await type(driver, width, "0.9 MeV");
    await driver.findElement(By.css("button[aria-label^='Undo']")).click();
    expect(await width.getAttribute("value")).toBe(before);
    await driver.findElement(By.css("body")).sendKeys(Key.chord(Key.CONTROL, "y"));
    await until(driver, "redo did nothing", "return document.querySelector('[data-path=\"model.resonances[0].width\"]').value === '0.9 MeV'");
  });

  it("lets the curve follow a slider", async () => {
    await enter(driver, "Model");
    const before = await pixels(driver);
    const slider = await driver.findElement(By.css("input[type=range][aria-label^='Width']"));
    await driver.executeScript("arguments[0].focus()", slider);
    for (let i = 0; i < 20; i += 1) await slider.sendKeys(Key.ARROW_RIGHT);
    await driver.wait(async () => (await pixels(driver)) !== before, 5000, "the curve stood still");
  });

  it("enters the running point with two numbers and Enter, in 8 seconds", async () => {
    await driver.findElement(By.css(".data tbody tr:last-child button[aria-label$='is running']")).click();
    await until(driver, "no running point", "return document.querySelector('.entry input[name=n]') !== null");
    const begun = Date.now();
    const n = await driver.findElement(By.css(".entry input[name=n]"));
    await type(driver, n, "199");
    await n.sendKeys(Key.TAB);
    const l = await driver.switchTo().activeElement();
    await l.sendKeys("130.0", Key.ENTER);
    await until(driver, "the table did not take it", "return [...document.querySelectorAll('.data tbody tr:last-child input')].some((input) => input.value === '199')");
    expect(Date.now() - begun).toBeLessThan(8000);
    const cells = await driver.executeScript<string[]>("return [...document.querySelectorAll('.data tbody tr:last-child input')].map((input) => input.value)");
    expect(cells.some((cell) => /^130\.0 \S+/.test(cell))).toBe(true);
  });

  it("leaves a point out with one click and takes it back with one key", async () => {
    const box = await driver.findElement(By.css(".data tbody tr:first-child input[type=checkbox]"));
    await box.click();
    expect(await driver.executeScript("return document.querySelector('.data tbody tr').className")).toBe("row-out");
    await driver.findElement(By.css("body")).sendKeys(Key.chord(Key.CONTROL, "z"));
    await until(driver, "undo did nothing", "return document.querySelector('.data tbody tr').className === ''");
  });

  it("adds a row and edits its cells as in a spreadsheet", async () => {
    const rows = await driver.findElements(By.css(".data tbody tr"));
    await press(driver, "Add a point");
    await until(driver, "no new row", "return document.querySelectorAll('.data tbody tr').length === arguments[0]", rows.length + 1);
    const first = await driver.findElement(By.css("[data-path='data.rows[0].comment']"));
    await driver.executeScript("arguments[0].focus()", first);
    await first.sendKeys("odd trigger", Key.ENTER);
    expect(await (await driver.switchTo().activeElement()).getAttribute("data-path")).toBe("data.rows[1].comment");
  });

  it("keeps what was typed through a reload", async () => {
    await enter(driver, "Model");
    await type(driver, await field(driver, "model.resonances[0].name"), "kept");
    await until(driver, "not saved", "return /^Saved in this browser/.test(document.querySelector('.saved').textContent)");
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Model");
    expect(await (await field(driver, "model.resonances[0].name")).getAttribute("value")).toBe("kept");
  });

  it("does not let two tabs overwrite each other", async () => {
    const first = await driver.getWindowHandle();
    await driver.switchTo().newWindow("tab");
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Model");
    await type(driver, await field(driver, "model.resonances[0].name"), "second tab");
    await until(driver, "not saved", "return /^Saved in this browser/.test(document.querySelector('.saved').textContent)");
    await driver.close();
    await driver.switchTo().window(first);
    await until(driver, "the first tab does not know", "return [...document.querySelectorAll('.stripe')].some((stripe) => /Another tab/.test(stripe.innerText))");
    await enter(driver, "Model");
    expect(await (await field(driver, "model.resonances[0].name")).getAttribute("value")).not.toBe("second tab");
  });

  it("opens the hand-over page with plot, results and points", async () => {
    await enter(driver, "Sheet");
    await press(driver, "Hand-over page");
    await until(driver, "no paper", "return document.querySelectorAll('.paper canvas').length === 3");
    const paper = await text(driver, ".paper");
    for (const part of ["Assumptions", "Energy scale", "Points", "Cautions", "Invented"]) expect(paper).toContain(part);
  });
});
