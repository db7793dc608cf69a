import type { FrontResult } from "@/lib/science/front/front-result";

/** The verdict in one sentence, its reasons a click away, warnings in sight. */
export function VerdictBlock({ front }: { front: FrontResult }) {
  return (
    <section aria-label="Verdict" className="border-l-[3px] border-front pl-4">
      <p className="text-[1.2rem] leading-snug font-[560]">{front.verdictSentence}</p>
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
