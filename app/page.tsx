import { redirect } from 'next/navigation';
import { currentMember } from '@/lib/server/member';

export default async function Start() {
  redirect((await currentMember()) ? '/today' : '/sign-in');
}
