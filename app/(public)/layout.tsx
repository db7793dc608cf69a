import type { ReactNode } from "react";
import { ThemeSwitch } from "@/components/shell/theme-switch";
import { TideLines } from "@/components/shell/tide-lines";
import { Wordmark } from "@/components/shell/wordmark";

export default function PublicLayout({ children }: { children: ReactNode }) {
  return (
    <div className="relative flex min-h-dvh flex-col overflow-hidden">
      <TideLines />
      <header className="relative flex items-center justify-between px-5 py-4 sm:px-10">
        <Wordmark />
        <ThemeSwitch />
      </header>
      <main className="relative grow px-5 py-6 sm:px-10 sm:py-14">{children}</main>
      <footer className="label relative max-w-3xl px-5 py-5 sm:px-10">
        Strandline analyses data; it controls no laser, trap or interlock. Its error bars hold under stated assumptions, and a claim in a paper stays its authors’ own.
      </footer>
    </div>
  );
}
