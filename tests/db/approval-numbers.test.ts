import { eq } from 'drizzle-orm';
import { afterAll, expect, test } from 'vitest';
import { seriesVersion, study } from '@/db/schema';
import { recordVisit } from '@/lib/server/bench/record-visit';
import { reportLost } from '@/lib/server/bench/report-lost';
import { startSession } from '@/lib/server/bench/start-session';
import { submitSeries } from '@/lib/server/series/submit';
import { acting, DAY, freshLab, MONDAY, openTestDatabase, plus } from '../setup/fresh-lab';
import { askedLayOut, designedSeries, laidOutStudy, newestVersion } from '../setup/fresh-study';

const { db, close } = openTestDatabase();
afterAll(close);

const approval = { approvalReference: 'EC 4/27', approvalExpires: plus(MONDAY, 120 * DAY) };

async function begin(perturbs: 'animal' | 'micro-organisms') {
  const lab = await freshLab(db);
  const about = await laidOutStudy(db, lab, { ...approval, perturbs });
  const row = about.rows[0]!;
  const at = row.session.startsAt;
  const by = acting(db, lab.people.technician, at);
  await startSession(by, { sessionId: row.session.id, at: at.toISOString() });
  const set = () =>
    recordVisit(by, {
      sessionId: row.session.id,
      visitId: row.visits[0]!.id,
      at: at.toISOString(),
      outcome: 'done',
      remark: '',
      dose: row.run.dose,
      values: [],
    });
  const lose = () =>
    reportLost(by, { sessionId: row.session.id, at: at.toISOString(), reason: 'died' });
  return { lab, ...about, set, lose, at };
}

test('no dose is set once the approval has expired, though the session stands on the calendar', async () => {
  const of = await begin('animal');
  await db
    .update(study)
    .set({ approvalExpires: plus(of.at, -1) })
    .where(eq(study.id, of.studyId));
  await expect(of.set()).rejects.toMatchObject({ code: 'not-possible' });
  await expect(of.set()).rejects.toThrow(/approval of this study has expired/);
});

test('an animal that is lost counts: another in its place goes beyond the approved number', async () => {
  const of = await begin('animal');
  await of.set();
  await of.lose();
  const ask = askedLayOut(db, of.lab, of.studyId, plus(of.at, DAY));
  await expect(ask).rejects.toThrow(/up to 1 in number; .* would be 2/);
});

test('one that was lost before any dose was set does not count, nor does a culture', async () => {
  const unused = await begin('animal');
  await unused.lose();
  await expect(
    askedLayOut(db, unused.lab, unused.studyId, plus(unused.at, DAY)),
  ).resolves.toHaveProperty('jobId');
  const culture = await begin('micro-organisms');
  await culture.set();
  await culture.lose();
  await expect(
    askedLayOut(db, culture.lab, culture.studyId, plus(culture.at, DAY)),
  ).resolves.toHaveProperty('jobId');
});

test.each(['animal', 'micro-organisms'] as const)(
  'a later version on %s inherits only while the number is kept',
  async (perturbs) => {
    const of = await begin(perturbs);
    await of.set();
    const further = async () => {
      const id = await designedSeries(db, of.lab, of);
      const { ref } = await newestVersion(db, of.lab, of.studyId);
      await submitSeries(acting(db, of.lab.people.investigator), ref);
      const [row] = await db.select().from(seriesVersion).where(eq(seriesVersion.id, id));
      return row?.state;
    };
    // The same preparation goes on.
    expect(await further()).toBe('approved');
    await of.lose();
    expect(await further()).toBe(perturbs === 'animal' ? 'submitted' : 'approved');
  },
);
