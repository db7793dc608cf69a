import type { Metadata } from "next";
import { SetupForm } from "@/components/forms/setup-form";
import { setupAction } from "./actions";

export const metadata: Metadata = { title: "Set up", referrer: "no-referrer" };

export default async function SetupPage({ searchParams }: PageProps<"/setup">) {
  const { key } = await searchParams;
  return (
    <div className="max-w-sm">
      <h1>Set up your group</h1>
      <p className="mt-2 mb-6 text-muted">This link works once. It makes the group and its first owner, who can do everything.</p>
      <SetupForm action={setupAction} setupKey={typeof key === "string" ? key : ""} />
    </div>
  );
}
