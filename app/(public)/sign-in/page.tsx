import type { Metadata } from "next";
import { SignInForm } from "@/components/forms/sign-in-form";
import { signInAction } from "./actions";

export const metadata: Metadata = { title: "Sign in" };

export default async function SignInPage({ searchParams }: PageProps<"/sign-in">) {
  const { next } = await searchParams;
  return (
    <div className="max-w-sm">
      <h1>Sign in</h1>
      <p className="mt-2 mb-6 text-muted">From site-resolved shots to a light-cone front, with every number traceable to the shots.</p>
      <SignInForm action={signInAction} next={typeof next === "string" ? next : ""} />
    </div>
  );
}
