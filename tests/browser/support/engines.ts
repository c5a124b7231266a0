// Real browsers behind one client (W3C WebDriver). Nothing is downloaded here: browser and driver
// are those on PATH.
import { type ChildProcess, spawn } from "node:child_process";
import { existsSync } from "node:fs";
import { Builder, Capabilities, type WebDriver, logging } from "selenium-webdriver";
import chrome from "selenium-webdriver/chrome.js";
import firefox from "selenium-webdriver/firefox.js";

export type Engine = "chromium" | "firefox" | "webkit";

/** The engines this run is about (`cargo xtask page --all` names all three). */
export const engines = (process.env["WIDTHWISE_BROWSERS"] ?? "chromium").split(",") as Engine[];

export interface Look {
  width?: number;
  height?: number;
  dark?: boolean;
}

const WEBKIT = "/usr/lib/x86_64-linux-gnu/webkit2gtk-4.1/MiniBrowser";

function where(...names: string[]): string {
  const folders = (process.env["PATH"] ?? "").split(":");
  for (const name of names) {
    const found = folders.map((folder) => `${folder}/${name}`).find((path) => existsSync(path));
    if (found) return found;
  }
  throw new Error(`none of ${names.join(", ")} is on PATH`);
}

async function chromium(look: Look): Promise<WebDriver> {
  const options = new chrome.Options();
  options.setChromeBinaryPath(where("chromium", "chromium-browser", "google-chrome"));
  options.addArguments(
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-dev-shm-usage",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--no-first-run",
    "--hide-scrollbars",
    `--window-size=${look.width ?? 1280},${look.height ?? 900}`,
    ...(look.dark ? ["--force-dark-mode"] : []),
  );
  const preferences = new logging.Preferences();
  preferences.setLevel(logging.Type.PERFORMANCE, logging.Level.ALL);
  preferences.setLevel(logging.Type.BROWSER, logging.Level.ALL);
  options.setLoggingPrefs(preferences);
  const service = new chrome.ServiceBuilder(where("chromedriver"));
  return new Builder().forBrowser("chrome").setChromeOptions(options).setChromeService(service).build();
}

async function gecko(look: Look): Promise<WebDriver> {
  const options = new firefox.Options();
  options.setBinary(where("firefox", "firefox-esr"));
  options.addArguments("-headless", `--width=${look.width ?? 1280}`, `--height=${look.height ?? 900}`);
  options.setPreference("layout.css.prefers-color-scheme.content-override", look.dark ? 0 : 1);
  const service = new firefox.ServiceBuilder(where("geckodriver"));
  return new Builder().forBrowser("firefox").setFirefoxOptions(options).setFirefoxService(service).build();
}

let webkitDriver: { url: string; processes: ChildProcess[] } | undefined;

async function startWebkitDriver(): Promise<string> {
  if (webkitDriver) return webkitDriver.url;
  const [display, port] = [`:${90 + (process.pid % 900)}`, 20_000 + (process.pid % 20_000)];
  const screen = spawn(where("Xvfb"), [display, "-screen", "0", "2560x1600x24"], { stdio: "ignore" });
  const driver = spawn(where("WebKitWebDriver"), [`--port=${port}`], {
    stdio: "ignore",
    env: {
      ...process.env,
      DISPLAY: display,
      WEBKIT_DISABLE_COMPOSITING_MODE: "1",
      WEBKIT_DISABLE_SANDBOX_THIS_IS_DANGEROUS: "1",
    },
  });
  const url = `http://127.0.0.1:${port}`;
  webkitDriver = { url, processes: [screen, driver] };
  process.on("exit", () => webkitDriver?.processes.forEach((child) => child.kill()));
  for (let attempt = 0; attempt < 100; attempt += 1) {
    await new Promise((resolve) => setTimeout(resolve, 100));
    const answer = await fetch(`${url}/status`).catch(() => undefined);
    if (answer?.ok) return url;
  }
  throw new Error("WebKitWebDriver does not answer");
}

async function webkit(look: Look): Promise<WebDriver> {
  const capabilities = new Capabilities();
  capabilities.setBrowserName("MiniBrowser");
  capabilities.set("webkitgtk:browserOptions", { binary: WEBKIT, args: ["--automation"] });
  const driver = await new Builder().usingServer(await startWebkitDriver()).withCapabilities(capabilities).build();
  await driver.manage().window().setRect({ x: 0, y: 0, width: look.width ?? 1280, height: look.height ?? 900 });
  return driver;
}

/** Starts a browser. The caller quits it. */
export async function open(engine: Engine, look: Look = {}): Promise<WebDriver> {
  const driver = await { chromium, firefox: gecko, webkit }[engine](look);
  // The first page of WebKit is slow.
  await driver.manage().setTimeouts({ pageLoad: 60_000, script: 60_000 });
  return driver;
}
