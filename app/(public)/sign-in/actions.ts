"use server";

import { headers } from "next/headers";
import { redirect } from "next/navigation";
import { z } from "zod";
import type { SignInState } from "@/components/forms/sign-in-form";
import { startSession } from "@/lib/accounts/browser-session";
import { safeTarget } from "@/lib/accounts/safe-target";
import { signIn } from "@/lib/accounts/sign-in";
import { clientAddress } from "@/lib/http/client-address";
import { isProblem } from "@/lib/problem";

const SignInForm = z.object({ email: z.string().max(254), password: z.string().max(200), next: z.string().max(2000).default("") });

/** Signs in and goes on to where the visitor wanted to be; a refusal keeps the address that was typed. */
export async function signInAction(_state: SignInState, form: FormData): Promise<SignInState> {
  const input = SignInForm.safeParse(Object.fromEntries(form));
  if (!input.success) return { message: "Mail address and password are needed.", email: "" };
  const { email, password, next } = input.data;
  const opened = await signIn({ email, password, clientAddress: clientAddress(await headers()) });
  if (isProblem(opened)) return { message: opened.detail, email };
  await startSession(opened);
  redirect(safeTarget(next));
}
