/** Particles, limits and units as the core knows them; asked for once. */
import { signal } from "@preact/signals";
import type { KnownLimit, KnownParticle } from "./types";
import { ask } from "./work";

export const particles = signal<KnownParticle[]>([]);
export const limits = signal<KnownLimit[]>([]);

/** Asks for the tables. */
export async function loadTables(): Promise<void> {
  const { body } = await ask({ kind: "tables" });
  if (body.kind !== "tables") return;
  particles.value = body.particles;
  limits.value = body.limits;
}
