import { useId, type ReactNode, type SelectHTMLAttributes } from "react";

interface ChoiceFieldProps extends SelectHTMLAttributes<HTMLSelectElement> {
  label: string;
  /** Value and text of each choice. */
  choices: readonly (readonly [value: string, text: string])[];
  hint?: ReactNode;
  error?: string | null;
}

/** A labelled list of choices with its hint and error tied to it for screen readers. */
export function ChoiceField({ label, choices, hint, error, ...select }: ChoiceFieldProps) {
  const id = useId();
  const described = [hint ? `${id}-hint` : "", error ? `${id}-error` : ""].filter(Boolean).join(" ");
  return (
    <div>
      <label htmlFor={id} className="mb-1 block font-[550]">
        {label}
      </label>
      <select id={id} className="field" aria-invalid={error ? true : undefined} aria-describedby={described || undefined} {...select}>
        {choices.map(([value, text]) => (
          <option key={value} value={value}>
            {text}
          </option>
        ))}
      </select>
      {hint && (
        <p id={`${id}-hint`} className="label mt-1">
          {hint}
        </p>
      )}
      {error && (
        <p id={`${id}-error`} className="mt-1 text-sm text-error">
          {error}
        </p>
      )}
    </div>
  );
}
