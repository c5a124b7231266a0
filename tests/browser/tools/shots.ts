// Screenshots for people to look at: every room, width and theme, as WIDTHWISE_OUT/WIDTH-THEME-ROOM.png.
import { mkdirSync, writeFileSync } from "node:fs";
import type { WebDriver } from "selenium-webdriver";
import { expect, it } from "vitest";
import { open } from "../support/engines";
import { fromFile, load } from "../support/page";

/** Wide wall screen, desk, tablet, phone; the height of a screen of that kind. */
const SIZES = [
  [2560, 1440],
  [1280, 900],
  [820, 1180],
  [390, 844],
] as const;
const THEMES = ["light", "dark", "dim"];
const out = process.env["WIDTHWISE_OUT"] ?? "../../target/shots";

/** Chromium's own commands: a window cannot be made as narrow as a phone. */
interface DevTools {
  sendDevToolsCommand(name: string, values: object): Promise<void>;
  sendAndGetDevToolsCommand(name: string, values: object): Promise<unknown>;
}

async function shoot(driver: WebDriver, name: string, whole: boolean): Promise<void> {
  await driver.executeAsyncScript("const done = arguments[0]; requestAnimationFrame(() => setTimeout(done, 400))");
  const tools = driver as unknown as DevTools;
  const shot = (await tools.sendAndGetDevToolsCommand("Page.captureScreenshot", { captureBeyondViewport: whole })) as { data: string };
  writeFileSync(`${out}/${name}.png`, Buffer.from(shot.data, "base64"));
}

it("takes the screenshots", async () => {
  mkdirSync(out, { recursive: true });
  const driver = await open("chromium");
  try {
    const tools = driver as unknown as DevTools;
    let taken = 0;
    for (const [width, height] of SIZES) {
      const mobile = width < 1000;
      await tools.sendDevToolsCommand("Emulation.setDeviceMetricsOverride", { width, height, deviceScaleFactor: mobile ? 2 : 1, mobile });
      for (const theme of THEMES) {
        await tools.sendDevToolsCommand("Emulation.setEmulatedMedia", {
          features: [{ name: "prefers-color-scheme", value: theme === "light" ? "light" : "dark" }],
        });
        await load(driver, fromFile);
        await driver.executeScript("const choice = document.querySelector('#theme'); choice.value = arguments[0]; choice.dispatchEvent(new Event('change', { bubbles: true }))", theme);
        await driver.sleep(800);
        const rooms = await driver.executeScript<string[]>(
          "return [...document.querySelectorAll('.doors button')].map((door) => door.textContent.trim())",
        );
        for (const [index, room] of rooms.entries()) {
          await driver.executeScript("document.querySelectorAll('.doors button')[arguments[0]].click()", index);
          await shoot(driver, `${width}-${theme}-${room.toLowerCase().replaceAll(" ", "-")}`, mobile);
          taken += 1;
        }
      }
    }
    console.log(`${taken} screenshots in ${out}`);
    expect(taken).toBeGreaterThan(0);
  } finally {
    await driver.quit();
  }
});
