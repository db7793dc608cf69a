"use server";

import { redirect } from "next/navigation";
import { endSession } from "@/lib/accounts/browser-session";

/** Ends this browser's session. */
export async function signOutAction(): Promise<void> {
  await endSession();
  redirect("/sign-in");
}
