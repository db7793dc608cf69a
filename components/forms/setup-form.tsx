"use client";

import { useActionState } from "react";
import type { ProblemPlace } from "@/lib/problem";
import { FormField } from "./form-field";

export interface SetupState {
  detail: string | null;
  errors: ProblemPlace[];
  typed: { groupName: string; name: string; email: string };
}

const EMPTY: SetupState = { detail: null, errors: [], typed: { groupName: "", name: "", email: "" } };

interface SetupFormProps {
  action: (state: SetupState, form: FormData) => Promise<SetupState>;
  setupKey: string;
}

/** The group's name and its first owner. */
export function SetupForm({ action, setupKey }: SetupFormProps) {
  const [state, submit, pending] = useActionState(action, EMPTY);
  const errorAt = (field: string) => state.errors.find((place) => place.where === field)?.message;
  return (
    <form action={submit} className="space-y-4">
      <input type="hidden" name="key" value={setupKey} />
      <FormField label="Name of the group" name="groupName" defaultValue={state.typed.groupName} error={errorAt("groupName")} required maxLength={120} />
      <FormField label="Your name" name="name" autoComplete="name" defaultValue={state.typed.name} error={errorAt("name")} required maxLength={120} />
      <FormField label="Mail address" name="email" type="email" autoComplete="username" defaultValue={state.typed.email} error={errorAt("email")} required />
      <FormField label="Password" name="password" type="password" autoComplete="new-password" hint="at least 10 characters" error={errorAt("password")} required minLength={10} />
      {state.detail && state.errors.length === 0 && (
        <p role="alert" className="notice notice-error">
          {state.detail}
        </p>
      )}
      <button type="submit" className="button button-primary" disabled={pending}>
        {pending ? "Setting up…" : "Set up and sign in"}
      </button>
    </form>
  );
}
