/** The lanes as one picture, on paper white whatever the theme. */

/** A PNG of all lanes; `null` if there is nothing to draw. */
export function picture(): Promise<Blob | null> {
  const canvases = [...document.querySelectorAll<HTMLCanvasElement>(".lanes-box canvas")];
  const width = Math.max(0, ...canvases.map((canvas) => canvas.width));
  const height = canvases.reduce((sum, canvas) => sum + canvas.height, 0);
  if (width === 0) return Promise.resolve(null);
  const sheet = document.createElement("canvas");
  sheet.width = width;
  sheet.height = height;
  const ctx = sheet.getContext("2d");
  if (ctx === null) return Promise.resolve(null);
  ctx.fillStyle = getComputedStyle(document.documentElement).getPropertyValue("--paper").trim();
  ctx.fillRect(0, 0, width, height);
  let y = 0;
  for (const canvas of canvases) {
    ctx.drawImage(canvas, 0, y);
    y += canvas.height;
  }
  return new Promise((resolve) => sheet.toBlob(resolve, "image/png"));
}
