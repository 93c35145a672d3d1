import { PageBody, PageHead } from '@/components/frame';
import { PageLoading } from '@/components/ui/page-loading';

export default function Loading() {
  return (
    <PageBody>
      <PageHead title="Today" />
      <div className="mt-6">
        <PageLoading what="looking up your sessions" />
      </div>
    </PageBody>
  );
}
