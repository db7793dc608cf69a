/** A study's answer in one sentence, with what to keep in mind below it. */
export function Sentence({ sentence, warnings, notes = [] }: { sentence: string; warnings: string[]; notes?: string[] }) {
  return (
    <>
      <p className="max-w-[75ch] font-[560]">{sentence}</p>
      {warnings.length > 0 && (
        <ul className="mt-1 max-w-[75ch] space-y-0.5 text-sm text-warning">
          {warnings.map((warning) => (
            <li key={warning}>{warning}</li>
          ))}
        </ul>
      )}
      {notes.length > 0 && (
        <details className="mt-1">
          <summary className="label cursor-pointer">How this is computed</summary>
          <ul className="mt-1 max-w-[75ch] list-disc space-y-1 pl-5 text-muted">
            {notes.map((note) => (
              <li key={note}>{note}</li>
            ))}
          </ul>
        </details>
      )}
    </>
  );
}
