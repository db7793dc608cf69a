"use client";

import { useActionState } from "react";
import { FormField } from "./form-field";

export interface SignInState {
  message: string | null;
  email: string;
}

interface SignInFormProps {
  action: (state: SignInState, form: FormData) => Promise<SignInState>;
  /** Where to go afterwards; checked on the server. */
  next: string;
}

/** Address and password; what was typed as address survives a refusal. */
export function SignInForm({ action, next }: SignInFormProps) {
  const [state, submit, pending] = useActionState(action, { message: null, email: "" });
  return (
    <form action={submit} className="space-y-4">
      <input type="hidden" name="next" value={next} />
      <FormField label="Mail address" name="email" type="email" autoComplete="username" defaultValue={state.email} required />
      <FormField label="Password" name="password" type="password" autoComplete="current-password" required />
      <p role="alert" className={state.message ? "notice notice-error" : "sr-only"}>
        {state.message}
      </p>
      <button type="submit" className="button button-primary" disabled={pending}>
        {pending ? "Signing in…" : "Sign in"}
      </button>
    </form>
  );
}
