import { eq } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { job, type Role } from '@/db/schema';
import type { DemoLab } from '@/db/seed';
import { demoLab, demoPeople } from '@/db/seed/people';
import type { ActionContext } from '@/lib/server/action';
import { finish } from '@/lib/server/jobs/queue';
import { storeOf } from '@/lib/server/jobs/stores';
import { workOf } from '@/lib/server/jobs/works';

const OWNER = 'demo';

/**
 * The demo is made by the program's own operations, as its people would do them: the same checks,
 * the same trail, at a time of the stage's choosing.
 */
export class Stage {
  constructor(
    readonly tx: Conn,
    readonly demo: DemoLab,
  ) {}

  /** Somebody of the demo lab, acting at `now`. */
  as(key: string, now: Date): ActionContext {
    const person = demoPeople.find((p) => p.key === key);
    const userId = this.demo.people[key];
    if (!person || !userId) throw new Error(`the demo lab has no ${key}`);
    return this.context(userId, person.role, person.name, person.email, now);
  }

  /** Whoever a session belongs to, acting at `now`. */
  asUser(userId: string, now: Date): ActionContext {
    const key = Object.entries(this.demo.people).find(([, id]) => id === userId)?.[0];
    if (!key) throw new Error('the demo lab has no such person');
    return this.as(key, now);
  }

  private context(userId: string, role: Role, name: string, email: string, now: Date) {
    return {
      db: this.tx,
      now,
      allowance: 'yes' as const,
      member: {
        userId,
        name,
        email,
        role,
        labId: this.demo.labId,
        lab: { ...demoLab, demo: true },
      },
    };
  }

  /** Works a queued calculation here and now, as the worker would. */
  async work(jobId: string, now: Date): Promise<string> {
    const [row] = await this.tx.select().from(job).where(eq(job.id, jobId));
    if (!row) throw new Error('there is no such calculation');
    await this.tx
      .update(job)
      .set({ state: 'running', leaseOwner: OWNER, attempts: 1 })
      .where(eq(job.id, jobId));
    const answer = workOf[row.kind](row.input, () => {});
    return this.tx.transaction(async (tx) => {
      const resultId = await storeOf[row.kind](tx, row, answer, now);
      await finish(tx, { id: jobId, owner: OWNER, now, resultId });
      if (!resultId) throw new Error(`the ${row.kind} of the demo made nothing`);
      return resultId;
    });
  }
}
