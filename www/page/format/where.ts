/** A path of the document as a person would say it: `model.resonances[0].width` -> "model › resonances 1 › width". */
export function where(path: string): string {
  return path
    .replace(/\[(\d+)\]/g, (_all, index: string) => ` ${Number(index) + 1}`)
    .replace(/\./g, " › ")
    .replace(/_/g, " ");
}
