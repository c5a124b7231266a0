// Nothing is lost: forbidden and full storage, a sheet in a link, a file of nonsense.
import { mkdtempSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { By, type WebDriver } from "selenium-webdriver";
import type { Driver } from "selenium-webdriver/chrome.js";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { enter, field, settled, text, type, until } from "./support/hand";
import { fromFile, load } from "./support/page";
import { afresh } from "./support/speed";

/** Only Chromium's driver can put a script before the page's own. */
const withStorageTaken = engines.filter((engine) => engine === "chromium");

describe.each(withStorageTaken)("storage taken away in %s", (engine) => {
  const cases = [
    ["forbidden", "for (const name of ['indexedDB', 'localStorage']) Object.defineProperty(globalThis, name, { get() { throw new DOMException('no', 'SecurityError'); } });"],
    ["full", "IDBObjectStore.prototype.put = () => { throw new DOMException('full', 'QuotaExceededError'); };"],
  ] as const;

  it.each(cases)("%s: the page works, says so, and asks for a file", async (_what, source) => {
    const driver = (await open(engine)) as Driver;
    try {
      await driver.sendDevToolsCommand("Page.addScriptToEvaluateOnNewDocument", { source });
      await load(driver, fromFile);
      await settled(driver);
      await enter(driver, "Model");
      await type(driver, await field(driver, "model.resonances[0].name"), "still here");
      await until(driver, "no word about saving", "return /Save the sheet to a file/.test(document.querySelector('.stripe-place').innerText) || /Not saved/.test(document.querySelector('.saved').innerText)");
      expect(await (await field(driver, "model.resonances[0].name")).getAttribute("value")).toBe("still here");
    } finally {
      await driver.quit();
    }
  });
});

describe.each(engines)("a page that is closed in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await afresh(driver);
  });
  afterAll(() => driver?.quit());

  it("has kept what was typed a moment before, Enter or not", async () => {
    await driver.findElement(By.css(".data tbody tr:last-child button[aria-label$='is running']")).click();
    await until(driver, "no running point", "return document.querySelector('.entry input[name=n]') !== null");
    await type(driver, (await driver.findElement(By.css(".entry input[name=n]"))) as never, "211");
    await driver.get("about:blank");
    await load(driver, fromFile);
    await until(driver, "the count is lost", "return [...document.querySelectorAll('.data tbody tr:last-child input')].some((input) => input.value === '211')");
  });
});

describe.each(engines)("links and files in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
  });
  afterAll(() => driver?.quit());

  it("carries a sheet in the fragment of a link", async () => {
    await load(driver, fromFile);
    await settled(driver);
    await enter(driver, "Model");
    await type(driver, await field(driver, "model.resonances[0].name"), "in the link");
    await enter(driver, "Sheet");
    // The clipboard of a headless browser is closed: the way out is the text to select.
    await driver.executeScript("Object.defineProperty(navigator, 'clipboard', { value: undefined }); document.execCommand = () => false;");
    await driver.findElement(By.xpath("//button[contains(., 'Copy a link')]")).click();
    await until(driver, "no text to copy", "return document.querySelector('.room textarea[readonly]') !== null");
    const link = await driver.executeScript<string>("return document.querySelector('.room textarea[readonly]').value");
    expect(link).toContain("#sheet=");
    await driver.get("about:blank");
    await load(driver, link);
    await settled(driver);
    await enter(driver, "Model");
    expect(await (await field(driver, "model.resonances[0].name")).getAttribute("value")).toBe("in the link");
  });

  it("opens the example and says so when a link is damaged", async () => {
    await driver.get("about:blank");
    await load(driver, `${fromFile}#sheet=AAAA`);
    await settled(driver);
    expect(await text(driver, ".stripe-place")).toContain("could not be read");
  });

  it.each([
    ["cut short", '{"format":"widthwise scan sheet","version":1,'],
    ["of a newer version", '{"format":"widthwise scan sheet","version":999}'],
    ["of something else", "%PDF-1.7"],
  ])("refuses a file %s and changes nothing", async (name, content) => {
    await driver.get("about:blank");
    await load(driver, fromFile);
    await settled(driver);
    const title = await driver.executeScript<string>("return document.querySelector('#sheet-title').value");
    await enter(driver, "Sheet");
    const path = join(mkdtempSync(join(tmpdir(), "widthwise-")), `${name}.json`);
    writeFileSync(path, content);
    await driver.findElement(By.css(".room input[type=file]")).sendKeys(path);
    await until(driver, "no message", "return /^Not opened: ./.test(document.querySelector('.room .told').innerText)");
    expect(await driver.executeScript("return document.querySelector('#sheet-title').value")).toBe(title);
  });
});
