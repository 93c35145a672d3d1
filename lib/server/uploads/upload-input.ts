import { uploadFields } from '@/lib/contracts/forms/readings';
import { AppError } from '../errors';
import type { UploadInput } from './accept-upload';
import { MOST_BYTES, tooLarge } from './read-multipart';

const field = (form: FormData, name: string): string | null => {
  const value = form.get(name);
  return typeof value === 'string' && value !== '' ? value : null;
};

function mappingOf(form: FormData): unknown {
  try {
    return JSON.parse(field(form, 'mapping') ?? '');
  } catch {
    throw new AppError('invalid-input', 'How the columns are to be read is not declared.', {
      at: 'mapping',
      mend: 'Declare columns, marks and units, then upload again.',
    });
  }
}

/** A file's own name without folders or control characters, for people to know it by. */
function plainName(name: string): string {
  const last = name.split(/[\\/]/).at(-1) ?? '';
  const plain = [...last].filter((c) => c.charCodeAt(0) >= 32 && c.charCodeAt(0) !== 127).join('');
  return plain.trim().slice(0, 255) || 'readings';
}

/** The parts of the upload's form, each checked; a field at fault is named. */
export async function uploadInput(studyId: string, form: FormData): Promise<UploadInput> {
  const file = form.get('file');
  if (!(file instanceof Blob)) {
    throw new AppError('invalid-input', 'No file came with the upload.', {
      at: 'file',
      mend: 'Choose a file, then upload again.',
    });
  }
  if (file.size > MOST_BYTES) throw tooLarge();
  if (file.size === 0) {
    throw new AppError('invalid-input', 'The file is empty. Nothing was kept.', {
      at: 'file',
      mend: 'Export the table again and upload it.',
    });
  }
  const fields = uploadFields.parse({
    runId: field(form, 'runId'),
    sessionId: field(form, 'sessionId'),
    mapping: mappingOf(form),
  });
  const bytes = new Uint8Array(await file.arrayBuffer());
  return {
    ...fields,
    studyId,
    bytes,
    fileName: plainName('name' in file ? String(file.name) : ''),
  };
}
