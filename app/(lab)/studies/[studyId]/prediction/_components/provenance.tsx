/** What a prediction was made from, so that anybody can make it again. */
export function Provenance(props: {
  systemNumber: number;
  draws: number;
  seed: number;
  engineVersion: string;
  by: string | null;
  at: string;
}) {
  const { systemNumber, draws, seed, engineVersion, by, at } = props;
  const facts = [
    `System v${systemNumber}`,
    `${draws} draws`,
    `seed ${seed}`,
    `engine version ${engineVersion}`,
    by ? `asked by ${by}` : null,
    at,
  ];
  return <p className="text-caption text-ink2">{facts.filter(Boolean).join('; ')}.</p>;
}
