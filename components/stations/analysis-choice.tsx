"use client";

import { usePathname, useRouter } from "next/navigation";

interface AnalysisChoiceProps {
  /** Newest first, finished ones only. */
  analyses: { number: number; label: string | null; text: string }[];
  shown: number;
}

/** Chooses which saved analysis the page shows; the choice stands in the address. */
export function AnalysisChoice({ analyses, shown }: AnalysisChoiceProps) {
  const router = useRouter();
  const pathname = usePathname();
  return (
    <label>
      <span className="sr-only">Analysis shown</span>
      <select className="field w-auto max-w-full" value={shown} onChange={(event) => router.push(`${pathname}?analysis=${event.target.value}`)}>
        {analyses.map((analysis) => (
          <option key={analysis.number} value={analysis.number}>
            {[`analysis ${analysis.number}`, analysis.label, analysis.text].filter(Boolean).join(" · ")}
          </option>
        ))}
      </select>
    </label>
  );
}
