import type { ReactNode } from "react";

interface SortButtonProps {
  sorted: false | "asc" | "desc";
  onClick: () => void;
  children: ReactNode;
}

/** A column head that sorts; the mark keeps its place, so heads do not shift. */
export function SortButton({ sorted, onClick, children }: SortButtonProps) {
  return (
    <button type="button" onClick={onClick} className="inline-flex items-baseline gap-1 font-[600] hover:text-ink">
      {children}
      <span aria-hidden="true" className={sorted ? "" : "opacity-0"}>
        {sorted === "asc" ? "↑" : "↓"}
      </span>
    </button>
  );
}
