// The built file: where it is, served or from the file system, and what went out of it.
import { readFileSync } from "node:fs";
import { type Server, createServer } from "node:http";
import type { AddressInfo } from "node:net";
import { resolve } from "node:path";
import { pathToFileURL } from "node:url";
import { type WebDriver, logging } from "selenium-webdriver";

export const file = resolve(process.env["WIDTHWISE_PAGE"] ?? "../../target/dist/widthwise.html");

/** Address of the file itself, as from a USB stick. */
export const fromFile = pathToFileURL(file).href;

/** Serves the file on localhost and remembers every request. */
export class Served {
  readonly requests: string[] = [];
  private constructor(private readonly server: Server) {}

  static async start(): Promise<Served> {
    const server = createServer((request, response) => {
      served.requests.push(request.url ?? "");
      const found = request.url === "/";
      response.writeHead(found ? 200 : 404, { "content-type": "text/html; charset=utf-8" });
      response.end(found ? readFileSync(file) : "");
    });
    const served = new Served(server);
    await new Promise<void>((done) => server.listen(0, "127.0.0.1", done));
    return served;
  }

  get url(): string {
    return `http://127.0.0.1:${(this.server.address() as AddressInfo).port}/`;
  }

  async stop(): Promise<void> {
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
