"use client";

import { useEffect, useRef, useState, type RefObject } from "react";

/** Returns a ref for a container and its width in px; `fallback` until it is measured. */
export function useMeasuredWidth<T extends HTMLElement>(fallback: number): [RefObject<T | null>, number] {
  const container = useRef<T>(null);
  const [width, setWidth] = useState(fallback);
  useEffect(() => {
    const element = container.current;
    if (!element) return;
    const observer = new ResizeObserver(([entry]) => setWidth(Math.max(120, Math.floor(entry.contentRect.width))));
    observer.observe(element);
    return () => observer.disconnect();
  }, []);
  return [container, width];
}
