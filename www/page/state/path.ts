/** Reads and writes the document by the same paths that a refusal names: `model.resonances[0].width`. */

type Step = string | number;

/** Splits a path into its steps. */
export function steps(path: string): Step[] {
  const found: Step[] = [];
  for (const match of path.matchAll(/([^.[\]]+)|\[(\d+)\]/g)) {
    if (match[2] !== undefined) found.push(Number(match[2]));
    else if (match[1] !== undefined) found.push(match[1]);
  }
  return found;
}

/** The value at a path; `undefined` where the path leads nowhere. */
export function at(root: unknown, path: string): unknown {
  let here: unknown = root;
  for (const step of steps(path)) {
    if (here === null || typeof here !== "object") return undefined;
    here = (here as Record<Step, unknown>)[step];
  }
  return here;
}

/** The text at a path, empty where there is none. */
export function textAt(root: unknown, path: string): string {
  const value = at(root, path);
  return typeof value === "string" ? value : "";
}

/** A copy with the value at the path replaced; `undefined` removes the key. What is not on the path is shared. */
export function withAt<T>(root: T, path: string, value: unknown): T {
  return put(root, steps(path), value) as T;
}

function put(here: unknown, path: Step[], value: unknown): unknown {
  const [step, ...rest] = path;
  if (step === undefined) return value;
  if (typeof step === "number") {
    const list = Array.isArray(here) ? [...(here as unknown[])] : [];
    list[step] = put(list[step], rest, value);
    return list;
  }
  const copy: Record<string, unknown> = { ...(here as Record<string, unknown> | undefined) };
  const next = put(copy[step], rest, value);
  if (next === undefined) delete copy[step];
  else copy[step] = next;
  return copy;
}
