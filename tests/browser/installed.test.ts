// The served page: kept by the browser, opened again without a server, changed only when told to.
import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { By, type WebDriver } from "selenium-webdriver";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { engines, open } from "./support/engines";
import { Served, file, inPage, load } from "./support/page";

describe.each(engines)("the page installed in %s", (engine) => {
  let driver: WebDriver;
  let served: Served;
  let folder: string;
  let port: number;

  beforeAll(async () => {
    folder = mkdtempSync(join(tmpdir(), "widthwise-served-"));
    cpSync(join(dirname(file), "served"), folder, { recursive: true });
    served = await Served.start({ folder });
    port = Number(new URL(served.url).port);
    driver = await open(engine);
    await load(driver, served.url);
    await inPage(driver, "await navigator.serviceWorker.ready; return true");
    await driver.wait(() => driver.executeScript("return navigator.serviceWorker.controller !== null"), 20_000, "the keeper does not take over");
  });
  afterAll(async () => {
    await driver?.quit();
    await served?.stop();
    rmSync(folder, { recursive: true, force: true });
  });

  it("opens without a server and computes", async () => {
    await served.stop();
    // Opened anew: the driver's own "refresh" goes past every keeper in Firefox, as Shift and Reload do.
    await load(driver, served.url);
    expect(await inPage<string>(driver, "return (await pool.run({ kind: 'tables' })).body.kind")).toBe("tables");
  });

  it("offers a newer version and changes to it only when told", async () => {
    for (const [name, from, to] of [
      ["index.html", "<title>Widthwise</title>", "<title>Widthwise, next</title>"],
      ["sw.js", /widthwise-[0-9a-f]+/, "widthwise-0000000000000000"],
    ] as const) {
      const path = join(folder, name);
      writeFileSync(path, readFileSync(path, "utf8").replace(from, to));
    }
    served = await Served.start({ folder, port });
    await inPage(driver, "await (await navigator.serviceWorker.ready).update(); return true");
    const offer = (): Promise<boolean> => driver.executeScript("return document.body.textContent.includes('A newer version of this page is ready')");
    await driver.wait(offer, 20_000, "no offer of the newer version");
    // Opening it again does not change it.
    await load(driver, served.url);
    expect(await driver.getTitle()).toBe("Widthwise");
    await driver.wait(offer, 20_000, "the offer is not repeated");
    await driver.findElement(By.xpath("//button[normalize-space()='Take it now']")).click();
    await driver.wait(async () => (await driver.getTitle()) === "Widthwise, next", 20_000, "the newer version did not come");
    await load(driver, served.url);
  });
});
