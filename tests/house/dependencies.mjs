// What others' work goes into the product: licences, duplicates and number. Run by `cargo xtask test`.
// Licences that are allowed stand in deny.toml, for cargo-deny too; the budget stands here.
import { execFileSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { dirname, resolve } from "node:path";
import { fileURLToPath } from "node:url";

const root = resolve(dirname(fileURLToPath(import.meta.url)), "../..");
const read = (name) => readFileSync(resolve(root, name), "utf8");

/** Crates in the WebAssembly and packages in the page, ours not counted. One more needs a reason. */
const MOST_CRATES = 40;
const MOST_PACKAGES = 8;

const [, list = ""] = /^allow = \[([^\]]*)\]/m.exec(read("deny.toml")) ?? [];
const allowed = new Set([...list.matchAll(/"([^"]+)"/g)].map(([, name]) => name));

/** Whether an SPDX expression can be met with allowed licences alone. */
export function acceptable(expression) {
  const words = expression.replaceAll("/", " OR ").match(/\(|\)|[^\s()]+/g) ?? [];
  let at = 0;
  const one = () => {
    if (words[at] === "(") {
      at += 1;
      const inner = any();
      at += 1;
      return inner;
    }
    let name = words[at++] ?? "";
    if (words[at] === "WITH") {
      name = `${name} WITH ${words[at + 1]}`;
      at += 2;
    }
    return allowed.has(name);
  };
  const all = () => {
    let met = one();
    while (words[at] === "AND") {
      at += 1;
      met = one() && met;
    }
    return met;
  };
  const any = () => {
    let met = all();
    while (words[at] === "OR") {
      at += 1;
      met = all() || met;
    }
    return met;
  };
  return any() && at === words.length;
}

const cargo = process.env["CARGO"] ?? "cargo";
const ask = (...words) => execFileSync(cargo, [...words, "--locked"], { cwd: root, encoding: "utf8", maxBuffer: 1 << 28 });

const checks = [];
const check = (name, wrong) => checks.push({ name, wrong });

const foreign = JSON.parse(ask("metadata", "--format-version", "1")).packages.filter((one) => one.source !== null);
check(
  "licences of all crates",
  foreign.filter((one) => !acceptable(one.license ?? "none")).map((one) => `${one.name} ${one.version}: ${one.license}`),
);

/** "name version" of what is linked into the WebAssembly; macros and what only macros need left out. */
const tree = ask("tree", "-p", "widthwise-web", "--target", "wasm32-unknown-unknown", "-e", "normal,no-proc-macro", "--prefix", "none", "-f", "{p}");
const lines = tree.split("\n").map((line) => line.split(" ").slice(0, 2).join(" "));
const product = [...new Set(lines)].filter((line) => line !== "" && !line.startsWith("widthwise-"));
const names = product.map((line) => line.split(" ")[0]);
check("no crate twice in the product", names.filter((name, index) => names.indexOf(name) !== index));
check("number of crates in the product", product.length > MOST_CRATES ? [`${product.length}, ${MOST_CRATES} allowed`] : []);

/** Packages of the page: its dependencies and theirs. */
const packages = new Map();
const open = Object.keys(JSON.parse(read("www/package.json")).dependencies);
while (open.length > 0) {
  const name = open.pop();
  if (packages.has(name)) continue;
  const one = JSON.parse(read(`www/node_modules/${name}/package.json`));
  packages.set(name, one);
  open.push(...Object.keys(one.dependencies ?? {}));
}
check(
  "licences of the page's packages",
  [...packages.values()].filter((one) => !acceptable(String(one.license))).map((one) => `${one.name}: ${one.license}`),
);
check("number of packages in the page", packages.size > MOST_PACKAGES ? [`${packages.size}, ${MOST_PACKAGES} allowed`] : []);
check("the check itself", ["GPL-3.0", "MIT AND GPL-3.0", "(MIT", ""].filter(acceptable));

for (const { name, wrong } of checks) console.log(`${wrong.length === 0 ? "ok    " : "FAILED"} ${name}${wrong.length === 0 ? "" : `: ${wrong.join("; ")}`}`);
console.log(`${product.length} crates in the WebAssembly: ${names.sort().join(", ")}`);
console.log(`${packages.size} packages in the page: ${[...packages.keys()].sort().join(", ")}`);
const failed = checks.filter(({ wrong }) => wrong.length > 0).length;
console.log(`${checks.length - failed} passed, ${failed} failed`);
process.exit(failed > 0 ? 1 : 0);
