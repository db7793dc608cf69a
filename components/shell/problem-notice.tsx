import type { ProblemAnswer } from "@/components/data/api-types";

interface ProblemNoticeProps {
  title: string;
  problem: Pick<ProblemAnswer, "detail" | "errors"> | null;
}

/** What was refused, and where exactly. */
export function ProblemNotice({ title, problem }: ProblemNoticeProps) {
  return (
    <div role="alert" className="notice notice-error">
      <p className="font-[600]">{title}</p>
      {problem && (!problem.errors || problem.errors.length === 0) && <p>{problem.detail}</p>}
      {problem?.errors && problem.errors.length > 0 && (
        <ul className="mt-1 space-y-0.5">
          {problem.errors.slice(0, 10).map((place) => (
            <li key={`${place.where} ${place.message}`}>
              <span className="figures font-[600] break-words">{place.where}</span>: {place.message}
            </li>
          ))}
          {problem.errors.length > 10 && <li className="label">and {problem.errors.length - 10} more</li>}
        </ul>
      )}
    </div>
  );
}
