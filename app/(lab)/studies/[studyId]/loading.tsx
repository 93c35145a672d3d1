import { PageLoading } from '@/components/ui/page-loading';

/** Beneath the study's head, which is drawn first: an unknown study is told before this shows. */
export default function Loading() {
  return <PageLoading what="looking up the study" tall />;
}
