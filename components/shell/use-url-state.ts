"use client";

import { usePathname, useSearchParams } from "next/navigation";
import { useCallback } from "react";

/**
 * Keeps one choice of a view in the address, so that a link shows the same picture. Returns the value (or `fallback`)
 * and a setter, which replaces the history entry instead of adding one.
 */
export function useUrlState(name: string, fallback: string): [string, (value: string) => void] {
  const pathname = usePathname();
  const params = useSearchParams();
  const set = useCallback(
    (value: string) => {
      const next = new URLSearchParams(window.location.search);
      if (value === fallback) next.delete(name);
      else next.set(name, value);
      const query = next.toString();
      window.history.replaceState(null, "", query ? `${pathname}?${query}` : pathname);
    },
    [name, fallback, pathname],
  );
  return [params.get(name) ?? fallback, set];
}
