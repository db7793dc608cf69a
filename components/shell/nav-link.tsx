"use client";

import Link from "next/link";
import { usePathname } from "next/navigation";
import type { ReactNode } from "react";

/** A link of the main navigation; the room one stands in is underlined in ink. */
export function NavLink({ href, children }: { href: string; children: ReactNode }) {
  const here = usePathname().startsWith(href);
  return (
    <Link
      href={href}
      aria-current={here ? "page" : undefined}
      className={`border-b-2 py-1 font-[550] no-underline ${here ? "border-ink" : "border-transparent text-muted hover:text-ink"}`}
    >
      {children}
    </Link>
  );
}
