import { AppError } from '../errors';

export const MOST_BYTES = 50 * 1024 * 1024;
/** Room for the other fields and the boundaries of the form. */
const FORM_BYTES = 256 * 1024;

export const tooLarge = () =>
  new AppError('too-large', 'The file is larger than 50 MB. Nothing was kept.', {
    at: 'file',
    mend: 'Split it, or leave out the columns that are not readings, and upload the parts.',
  });

/** The request's body, which ends in `too-large` as soon as it passes `most` bytes. */
function counted(body: ReadableStream<Uint8Array>, most: number): ReadableStream<Uint8Array> {
  let seen = 0;
  return body.pipeThrough(
    new TransformStream<Uint8Array, Uint8Array>({
      transform(chunk, controller) {
        seen += chunk.byteLength;
        if (seen > most) controller.error(tooLarge());
        else controller.enqueue(chunk);
      },
    }),
  );
}

const malformed = () =>
  new AppError('invalid-input', 'The upload arrived incomplete. Nothing was kept.', {
    at: 'file',
    mend: 'Send the file again; if it fails again, choose it anew.',
  });

/**
 * Reads a form with one file. A body that says it is too long is refused unread; one that does not
 * say so is read no further than the limit.
 */
export async function readMultipart(request: Request, mostBytes = MOST_BYTES): Promise<FormData> {
  const most = mostBytes + FORM_BYTES;
  const declared = Number(request.headers.get('content-length') ?? '0');
  if (declared > most) throw tooLarge();
  const type = request.headers.get('content-type') ?? '';
  if (!/^multipart\/form-data\s*;/i.test(type) || !request.body) throw malformed();
  try {
    const body = counted(request.body, most);
    return await new Response(body, { headers: { 'content-type': type } }).formData();
  } catch (error) {
    if (error instanceof AppError) throw error;
    const cause = (error as { cause?: unknown }).cause;
    if (cause instanceof AppError) throw cause;
    throw malformed();
  }
}
