/** Line icons drawn on one 20-unit grid. Always beside words or an accessible name. */
import type { JSX } from "preact";

const PATHS = {
  undo: "M7.5 5 4 8.5 7.5 12 M4 8.5h7.5a4.5 4.5 0 0 1 0 9H9",
  redo: "M12.5 5 16 8.5 12.5 12 M16 8.5H8.5a4.5 4.5 0 0 0 0 9H11",
  plus: "M10 4v12 M4 10h12",
  minus: "M4 10h12",
  close: "M5 5l10 10 M15 5 5 15",
  down: "M5 8l5 5 5-5",
  next: "M4 10h11 M11 6l4 4-4 4",
  copy: "M7 7V3.5h9.5V13H13 M3.5 7H13v9.5H3.5z",
  file: "M5 2.5h6.5L15 6v11.5H5z M11.5 2.5V6H15",
  save: "M10 3v9 M6.5 9 10 12.5 13.5 9 M4 16.5h12",
  print: "M6 7V3h8v4 M6 14H3.5V7h13v7H14 M6 12h8v5H6z",
  whole: "M3 7V3h4 M17 7V3h-4 M3 13v4h4 M17 13v4h-4",
  warn: "M10 3 18 17H2z M10 8v4.5 M10 14.2v.8",
  table: "M3 4h14v12H3z M3 8h14 M3 12h14 M8 4v12",
  image: "M3 4h14v12H3z M3 14l4-4 3 3 3-4 4 4",
} as const;

/** Name of an icon. */
export type IconName = keyof typeof PATHS;

/** One icon, as high as the text beside it. */
export function Icon({ name }: { name: IconName }): JSX.Element {
  return (
    <svg class="icon" viewBox="0 0 20 20" aria-hidden="true" focusable="false">
      <path d={PATHS[name]} />
    </svg>
  );
}
