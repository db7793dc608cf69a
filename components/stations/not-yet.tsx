import Link from "next/link";

const NEXT = {
  shots: { text: "No shots have been read yet.", link: "Add an archive", segment: "shots" },
  detection: { text: "An analysis needs thresholds first.", link: "Save a detection", segment: "detection" },
} as const;

/** What is missing before this station has anything to show, and where to make it. */
export function NotYet({ runId, missing }: { runId: string; missing: keyof typeof NEXT }) {
  const { text, link, segment } = NEXT[missing];
  return (
    <p className="notice">
      {text} <Link href={`/runs/${runId}/${segment}`}>{link}</Link>.
    </p>
  );
}
