import { useId, type InputHTMLAttributes, type ReactNode } from "react";

interface FormFieldProps extends InputHTMLAttributes<HTMLInputElement> {
  label: string;
  /** Unit or short explanation under the field. */
  hint?: ReactNode;
  error?: string | null;
}

/** A labelled input with its hint and error tied to it for screen readers. */
export function FormField({ label, hint, error, ...input }: FormFieldProps) {
  const id = useId();
  const described = [hint ? `${id}-hint` : "", error ? `${id}-error` : ""].filter(Boolean).join(" ");
  return (
    <div>
      <label htmlFor={id} className="mb-1 block font-[550]">
        {label}
      </label>
      <input id={id} className="field" aria-invalid={error ? true : undefined} aria-describedby={described || undefined} {...input} />
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
