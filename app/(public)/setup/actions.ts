"use server";

import { headers } from "next/headers";
import { redirect } from "next/navigation";
import type { SetupState } from "@/components/forms/setup-form";
import { startSession } from "@/lib/accounts/browser-session";
import { redeemSetupKey } from "@/lib/accounts/setup-key";
import { signIn } from "@/lib/accounts/sign-in";
import { clientAddress } from "@/lib/http/client-address";
import { isProblem } from "@/lib/problem";

/** Makes the first group and its owner and signs the owner in. */
export async function setupAction(_state: SetupState, form: FormData): Promise<SetupState> {
  const text = (name: string) => String(form.get(name) ?? "");
  const typed = { groupName: text("groupName"), name: text("name"), email: text("email") };
  const password = text("password");
  const redeemed = await redeemSetupKey({ key: text("key"), ...typed, password });
  if (isProblem(redeemed)) return { detail: redeemed.detail, errors: redeemed.errors, typed };
  const opened = await signIn({ email: typed.email, password, clientAddress: clientAddress(await headers()) });
  if (isProblem(opened)) redirect("/sign-in");
  await startSession(opened);
  redirect("/runs");
}
