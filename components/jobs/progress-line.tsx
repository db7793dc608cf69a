interface ProgressLineProps {
  title: string;
  stage: string;
  /** 0 … 1 */
  fraction: number;
  secondsLeft: number | null;
}

/** A hairline that fills with ink, with what is happening and the time left. */
export function ProgressLine({ title, stage, fraction, secondsLeft }: ProgressLineProps) {
  const percent = Math.floor(100 * fraction);
  return (
    <div>
      <p className="flex flex-wrap items-baseline justify-between gap-x-4">
        <span>
          <span className="font-[600]">{title}</span> <span className="text-muted">{stage}</span>
        </span>
        <span className="label figures">
          {percent} %{secondsLeft !== null && secondsLeft > 1 && `, ${timeText(secondsLeft)} left`}
        </span>
      </p>
      <div role="progressbar" aria-label={title} aria-valuenow={percent} aria-valuemin={0} aria-valuemax={100} className="mt-1.5 h-[3px] bg-hairline">
        <div className="h-full bg-ink transition-[width] duration-200" style={{ width: `${100 * fraction}%` }} />
      </div>
    </div>
  );
}

function timeText(seconds: number): string {
  if (seconds < 90) return `about ${Math.ceil(seconds)} s`;
  return `about ${Math.round(seconds / 60)} min`;
}
