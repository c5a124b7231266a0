// The built file: where it is, served or from the file system, and what went out of it.
import { readFileSync, readdirSync } from "node:fs";
import { type Server, createServer } from "node:http";
import type { AddressInfo } from "node:net";
import { resolve } from "node:path";
import { pathToFileURL } from "node:url";
import { type WebDriver, logging } from "selenium-webdriver";

export const file = resolve(process.env["WIDTHWISE_PAGE"] ?? "../../target/dist/widthwise.html");

/** Address of the file itself, as from a USB stick. */
export const fromFile = pathToFileURL(file).href;

const kinds: Record<string, string> = {
  html: "text/html; charset=utf-8",
  js: "text/javascript",
  svg: "image/svg+xml",
  webmanifest: "application/manifest+json",
};

/** Serves the file, or a folder with an index.html, on localhost and remembers every request. */
export class Served {
  readonly requests: string[] = [];
  private address = "";
  private constructor(private readonly server: Server) {}

  static async start({ folder, port = 0 }: { folder?: string; port?: number } = {}): Promise<Served> {
    const server = createServer((request, response) => {
      const path = (request.url ?? "").split("?")[0] ?? "";
      served.requests.push(path);
      const name = path === "/" ? "index.html" : path.slice(1);
      const found = folder === undefined ? (path === "/" ? file : undefined) : readdirSync(folder).includes(name) ? resolve(folder, name) : undefined;
      const kind = kinds[name.split(".").at(-1) ?? ""] ?? "text/plain";
      response.writeHead(found === undefined ? 404 : 200, { "content-type": kind, "cache-control": "no-cache" });
      response.end(found === undefined ? "" : readFileSync(found));
    });
    const served = new Served(server);
    await new Promise<void>((done) => server.listen(port, "127.0.0.1", done));
    served.address = `http://127.0.0.1:${(server.address() as AddressInfo).port}/`;
    return served;
  }

  /** Also after it has stopped: the address it had. */
  get url(): string {
    return this.address;
  }

  async stop(): Promise<void> {
    if (!this.server.listening) return;
    this.server.closeAllConnections();
    await new Promise((done) => this.server.close(done));
  }
}

/** Opens the page and waits for the engine. */
export async function load(driver: WebDriver, url: string): Promise<void> {
  await driver.get(url);
  await driver.wait(() => driver.executeScript("return Boolean(globalThis.widthwise?.pool)"), 30_000, "the engine did not start");
}

/**
 * Everything the page asked the network for, beyond itself: resource timing in every engine, the
 * browser's own log of requests (workers included) in Chromium.
 */
export async function outgoing(driver: WebDriver, url: string): Promise<string[]> {
  const listed = await driver.executeScript<string[]>(
    "return performance.getEntriesByType('resource').map((entry) => entry.name)",
  );
  const harmless = (address: string) => address === url || /^(blob|data|about|chrome|devtools):/.test(address);
  const name = (await driver.getCapabilities()).getBrowserName() ?? "";
  if (name.startsWith("chrom")) {
    for (const entry of await driver.manage().logs().get(logging.Type.PERFORMANCE)) {
      const { message } = JSON.parse(entry.message);
      if (message.method === "Network.requestWillBeSent") listed.push(message.params.request.url);
    }
  }
  return listed.filter((address) => !harmless(address));
}

/** Runs a function in the page with the pool and waits for its promise; what it throws is told. */
export async function inPage<T>(driver: WebDriver, body: string, ...values: unknown[]): Promise<T> {
  const wrapped = `
    const done = arguments[arguments.length - 1];
    const values = Array.from(arguments).slice(0, -1);
    const { pool } = globalThis.widthwise;
    (async () => { ${body} })().then(
      (value) => done({ value }),
      (error) => done({ error: error.name + ": " + error.message, refusal: error.refusal }),
    );`;
  const outcome = await driver.executeAsyncScript<{ value: T; error?: string; refusal?: unknown }>(wrapped, ...values);
  if (outcome.error) throw Object.assign(new Error(outcome.error), { refusal: outcome.refusal });
  return outcome.value;
}

/** The least that a page can do: a line on a canvas. */
export const EMPTY = `<!doctype html><title>empty</title><canvas id="c"></canvas><script>
  requestAnimationFrame(() => {
    const pen = document.getElementById("c").getContext("2d");
    pen.lineTo(9, 9);
    pen.stroke();
    performance.mark("first-plot");
  });
</script>`;

/** Time from the start of loading to the first curve, ms: the median of several loads. */
export async function firstPlot(driver: WebDriver, url: string, loads: number): Promise<number> {
  const times: number[] = [];
  for (let k = 0; k < loads; k += 1) {
    await driver.get(url);
    const mark = "return performance.getEntriesByName('first-plot')[0]?.startTime ?? 0";
    times.push(Number(await driver.wait(() => driver.executeScript<number>(mark), 30_000, "no first plot")));
  }
  return times.sort((a, b) => a - b)[loads >> 1] ?? Number.NaN;
}
