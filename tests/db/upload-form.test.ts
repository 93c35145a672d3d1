import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { type UploadMapping, uploadMapping } from '@/lib/contracts/forms/readings';
import { MOST_BYTES, readMultipart } from '@/lib/server/uploads/read-multipart';
import { uploadInput } from '@/lib/server/uploads/upload-input';
import { type EvidenceLab, evidenceLab, NOW, setRun, studyWithRuns } from './evidence-fixture';
import { openTestDatabase } from './studies-fixture';

const { db, close } = openTestDatabase();
afterAll(close);
let lab: EvidenceLab;
let study: Awaited<ReturnType<typeof studyWithRuns>>;
const SET = new Date(NOW.getTime() - 3 * 86_400_000);
beforeAll(async () => {
  lab = await evidenceLab(db);
  study = await studyWithRuns(db, lab, { levels: 4 });
  for (const r of study.runs.slice(0, 3)) {
    await setRun(db, { runId: r.id, by: lab.technician.userId, at: SET, dose: r.dose });
  }
});

const plain: UploadMapping = uploadMapping.parse({
  delimiter: ',',
  decimalMark: '.',
  timeColumn: 'time',
  timeKind: 'elapsed',
  timeUnit: 's',
  valueColumns: [{ column: 'x', readout: 'x' }],
});

describe('the form of an upload', () => {
  const request = (form: FormData, headers: Record<string, string> = {}) => {
    const built = new Request('http://127.0.0.1/', { method: 'POST', body: form });
    const all = new Headers(built.headers);
    for (const [key, value] of Object.entries(headers)) all.set(key, value);
    return new Request('http://127.0.0.1/', {
      method: 'POST',
      body: built.body,
      headers: all,
      duplex: 'half',
    } as RequestInit);
  };
  const form = (bytes: BlobPart, name = 'a.csv') => {
    const fields = new FormData();
    fields.set('file', new File([bytes], name));
    fields.set('runId', study.runs[0]!.id);
    fields.set('mapping', JSON.stringify(plain));
    return fields;
  };

  test('is read with its file and its declarations', async () => {
    const read = await readMultipart(request(form('time,x\n1,2\n', '../../etc/a\u0007.csv')));
    expect(await uploadInput(study.studyId, read)).toMatchObject({
      runId: study.runs[0]!.id,
      sessionId: null,
      fileName: 'a.csv',
      mapping: plain,
    });
  });

  test('that says it is too long is refused unread', async () => {
    let pulled = 0;
    const body = new ReadableStream<Uint8Array>(
      {
        pull(controller) {
          pulled += 1;
          controller.enqueue(new Uint8Array(65_536));
        },
      },
      { highWaterMark: 0 },
    );
    const long = new Request('http://127.0.0.1/', {
      method: 'POST',
      body,
      duplex: 'half',
      headers: {
        'content-type': 'multipart/form-data; boundary=x',
        'content-length': String(60 * 1024 * 1024),
      },
    } as RequestInit);
    await expect(readMultipart(long)).rejects.toMatchObject({ code: 'too-large' });
    expect(pulled).toBe(0);
  });

  test('that does not say so is read no further than the limit', async () => {
    let sent = 0;
    const head = '--x\r\ncontent-disposition: form-data; name="file"; filename="a.csv"\r\n\r\n';
    const body = new ReadableStream<Uint8Array>({
      pull(controller) {
        controller.enqueue(
          sent === 0 ? new TextEncoder().encode(head) : new Uint8Array(65_536).fill(49),
        );
        sent += 65_536;
      },
    });
    const endless = new Request('http://127.0.0.1/', {
      method: 'POST',
      body,
      duplex: 'half',
      headers: { 'content-type': 'multipart/form-data; boundary=x' },
    } as RequestInit);
    await expect(readMultipart(endless, 1_000_000)).rejects.toMatchObject({ code: 'too-large' });
    expect(sent).toBeLessThan(3_000_000);
    expect(MOST_BYTES).toBe(50 * 1024 * 1024);
  });

  test('that is cut off, or is no form, or lacks its parts is refused with words', async () => {
    const cut = new Request('http://127.0.0.1/', {
      method: 'POST',
      body: '--x\r\ncontent-disposition: form-data; name="file"; filename="a',
      headers: { 'content-type': 'multipart/form-data; boundary=x' },
    });
    await expect(readMultipart(cut)).rejects.toMatchObject({ code: 'invalid-input' });
    const text = new Request('http://127.0.0.1/', { method: 'POST', body: 'x' });
    await expect(readMultipart(text)).rejects.toMatchObject({ code: 'invalid-input' });
    const bare = new FormData();
    bare.set('runId', uuid());
    await expect(uploadInput(study.studyId, bare)).rejects.toMatchObject({
      detail: { at: 'file' },
    });
    const empty = form('');
    await expect(uploadInput(study.studyId, empty)).rejects.toMatchObject({
      detail: { at: 'file' },
    });
    const odd = form('time,x\n1,2\n');
    odd.set('mapping', '{');
    await expect(uploadInput(study.studyId, odd)).rejects.toMatchObject({
      detail: { at: 'mapping' },
    });
    odd.set('mapping', '{"delimiter":","}');
    await expect(uploadInput(study.studyId, odd)).rejects.toThrow();
  });
});
