/** Keys that work everywhere: undo and redo. */
import { redo, undo } from "./sheet";

/** Listens; returns what stops it. */
export function keepKeys(): () => void {
  const down = (event: KeyboardEvent): void => {
    if (!(event.ctrlKey || event.metaKey) || event.altKey) return;
    const key = event.key.toLowerCase();
    if (key === "z" && !event.shiftKey) undo();
    else if (key === "y" || (key === "z" && event.shiftKey)) redo();
    else return;
    event.preventDefault();
  };
  addEventListener("keydown", down);
  return () => removeEventListener("keydown", down);
}
