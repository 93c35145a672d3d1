import { labRoute, problemResponse } from '@/lib/server/route';
import { acceptUpload } from '@/lib/server/uploads/accept-upload';
import { UploadRefused } from '@/lib/server/uploads/import-file';
import { readMultipart } from '@/lib/server/uploads/read-multipart';
import { uploadInput } from '@/lib/server/uploads/upload-input';

/** Takes a file of readings in: what was kept, what was refused and why, and the job that judges it. */
export const POST = labRoute<{ studyId: string }>('upload readings', async (context, request) => {
  const form = await readMultipart(request);
  const input = await uploadInput(context.params.studyId, form);
  try {
    const account = await acceptUpload(context, input);
    return Response.json(account, { status: 201, headers: { 'cache-control': 'no-store' } });
  } catch (error) {
    if (!(error instanceof UploadRefused)) throw error;
    // The whole account goes with the refusal, row by row.
    const response = problemResponse(error);
    const body = { ...(await response.json()), problems: error.problems };
    return Response.json(body, { status: response.status, headers: response.headers });
  }
});
