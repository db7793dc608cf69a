"use client";

import { plainNumber } from "@/lib/number-text";

interface TimeSliderProps {
  times_us: number[];
  k: number;
  onChange: (k: number) => void;
}

/** Walks through the evolution times; arrow keys step, Home and End run to the ends. */
export function TimeSlider({ times_us, k, onChange }: TimeSliderProps) {
  return (
    <label className="mb-3 block">
      <span className="label flex justify-between">
        <span>Evolution time</span>
        <span className="figures text-ink">
          {plainNumber(times_us[k], 6)} µs <span className="text-muted">({k + 1} of {times_us.length})</span>
        </span>
      </span>
      <input
        type="range"
        min={0}
        max={times_us.length - 1}
        value={k}
        aria-valuetext={`${plainNumber(times_us[k], 6)} microseconds`}
        onChange={(event) => onChange(Number(event.target.value))}
        className="w-full accent-(--ink)"
      />
    </label>
  );
}
