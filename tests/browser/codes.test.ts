// A sheet carried by QR codes: drawn by the page, photographed (here: taken off the canvas), read by the page.
import { By, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { fromFile, load } from "./support/page";

const pause = (ms: number): Promise<void> => new Promise((done) => setTimeout(done, ms));

describe.each(engines)("codes in %s", (engine) => {
  let driver: WebDriver;
  beforeAll(async () => {
    driver = await open(engine);
    await load(driver, fromFile);
    await press("Sheet");
  });
  afterAll(() => driver?.quit());

  const press = async (text: string): Promise<void> => {
    const button = await driver.wait(async () => (await driver.findElements(By.xpath(`//button[normalize-space()='${text}']`)))[0] ?? null, 15_000, `no button ${text}`);
    await driver.executeScript("arguments[0].click()", button);
  };
  const title = (): Promise<string> => driver.executeScript("return document.getElementById('sheet-title').value");

  it("carries the sheet from one page to another", async () => {
    const name = await title();
    await press("Show as codes for a camera");
    await pause(300);
    const count = await driver.executeScript<number>("return Number(/of (\\d+)/.exec(document.querySelector('.code canvas').getAttribute('aria-label'))[1])");
    expect(count).toBeGreaterThanOrEqual(1);
    if (count > 1) await press("Hold");
    const pictures: string[] = [];
    for (let index = 0; index < count; index += 1) {
      pictures.push(await driver.executeScript<string>("return document.querySelector('.code canvas').toDataURL('image/png')"));
      if (count > 1) await press("Next");
      await pause(150);
    }
    // Another title, so that what is read can be told from what was there.
    await driver.executeScript(
      `const box = document.getElementById('sheet-title');
       box.value = 'overwritten'; box.dispatchEvent(new InputEvent('input', { bubbles: true }));`,
    );
    expect(await title()).toBe("overwritten");
    await driver.executeScript(
      `const files = arguments[0].map((picture, index) => {
         const bytes = Uint8Array.from(atob(picture.split(',')[1]), (char) => char.charCodeAt(0));
         return new File([bytes], 'code-' + index + '.png', { type: 'image/png' });
       });
       const transfer = new DataTransfer();
       for (const file of files) transfer.items.add(file);
       const input = document.querySelector('[data-test=code-photographs]');
       input.files = transfer.files;
       input.dispatchEvent(new Event('change', { bubbles: true }));`,
      pictures,
    );
    await driver.wait(async () => (await title()) === name, 20_000, "the sheet did not come back from the codes");
  });
});
