import type { FrontResult } from "@/lib/science/front/front-result";

interface VerdictBlockProps {
  front: FrontResult;
  /** What the comparison with a nearest-neighbour chain says; null until one has been made. */
  comparison: string | null;
}

/** The verdict in one sentence and that against a nearest-neighbour cone, the reasons a click away, warnings in sight. */
export function VerdictBlock({ front, comparison }: VerdictBlockProps) {
  return (
    <section aria-label="Verdict" className="border-l-[3px] border-front pl-4">
      <p className="text-[1.2rem] leading-snug font-[560]">{front.verdictSentence}</p>
      {comparison === null ? (
        <p className="label mt-0.5">
          Not yet compared with a nearest-neighbour cone; <a href="#studies">ask below</a>.
        </p>
      ) : (
        <p className="mt-0.5 max-w-[90ch]">{comparison}</p>
      )}
      <details className="mt-1">
        <summary className="label cursor-pointer">What this rests on, and what it does not say</summary>
        <ul className="mt-1 max-w-[75ch] list-disc space-y-1 pl-5 text-muted">
          {front.verdictReasons.map((reason) => (
            <li key={reason}>{reason}</li>
          ))}
        </ul>
      </details>
      {front.warnings.length > 0 && (
        <ul className="mt-1 space-y-0.5 text-sm text-warning">
          {front.warnings.map((warning) => (
            <li key={warning}>{warning}</li>
          ))}
        </ul>
      )}
    </section>
  );
}
