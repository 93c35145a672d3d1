import { ForbiddenState, KeyLink } from '@/components/ui';
import { peopleOfRole } from '@/db/queries/people';
import { database } from '@/lib/server/database';
import type { Member } from '@/lib/server/member';

/** A part of the lab that only the head sees: who can do it, and a key to ask them. */
export async function NotYours(props: { member: Member; title: string; who: string }) {
  const [head] = await peopleOfRole(database(), { labId: props.member.labId, roles: ['head'] });
  return (
    <ForbiddenState
      title={props.title}
      who={props.who}
      action={head ? <KeyLink href={`mailto:${head.email}`}>Ask {head.name}</KeyLink> : undefined}
    />
  );
}
