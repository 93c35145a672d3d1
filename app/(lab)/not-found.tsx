import { PageBody } from '@/components/frame';
import { PageMissing } from '@/components/ui/page-missing';

export default function NotFound() {
  return (
    <PageBody>
      <PageMissing />
    </PageBody>
  );
}
