import { and, eq, lt } from 'drizzle-orm';
import type { Conn, Db } from '@/db/client';
import { outbox } from '@/db/schema';
import { type DemoLab, seedDemoLab } from '@/db/seed';
import { stageChemostat } from './chemostat';
import { stageRepressor } from './repressor';
import { Stage } from './stage';

/** Mails of the demo's invented past are nobody's news. */
async function silencePast(tx: Conn, demo: DemoLab, now: Date): Promise<void> {
  await tx
    .update(outbox)
    .set({ state: 'dead', error: 'due before the demo lab opened' })
    .where(and(eq(outbox.labId, demo.labId), eq(outbox.state, 'waiting'), lt(outbox.dueAt, now)));
}

/** The demo lab with its studies, in one transaction; nothing when a lab exists. */
export function seedDemo(db: Db, now: Date): Promise<{ seeded: boolean }> {
  return seedDemoLab(db, async (tx, demo) => {
    const stage = new Stage(tx, demo);
    await stageChemostat(stage, now);
    await stageRepressor(stage, now);
    await silencePast(tx, demo, now);
  });
}
