"use client";

import { useId, useState, type ReactNode } from "react";

interface ChartFigureProps {
  title: string;
  /** One sentence under the title: what is drawn. */
  caption?: ReactNode;
  /** What is under the cursor, in words; null shows `hint`. */
  readOut: ReactNode | null;
  hint?: string;
  /** Links and controls at the right of the title. */
  actions?: ReactNode;
  /** The same data as a table. Rendered only when opened. */
  table: () => ReactNode;
  children: ReactNode;
}

/** A chart with its title, the read-out line below it and its table twin. The read-out keeps its height, so nothing jumps. */
export function ChartFigure({ title, caption, readOut, hint, actions, table, children }: ChartFigureProps) {
  const [tableOpen, setTableOpen] = useState(false);
  const tableId = useId();
  return (
    <figure className="min-w-0">
      <figcaption className="mb-1 flex flex-wrap items-baseline justify-between gap-x-4">
        <span>
          <span className="font-[640]">{title}</span>
          {caption && <span className="label ml-2">{caption}</span>}
        </span>
        <span className="label flex items-baseline gap-3">
          {actions}
          <button
            type="button"
            className="underline decoration-(--rule) underline-offset-3 hover:text-ink"
            aria-expanded={tableOpen}
            aria-controls={tableId}
            onClick={() => setTableOpen(!tableOpen)}
          >
            {tableOpen ? "Hide table" : "Table"}
          </button>
        </span>
      </figcaption>
      {children}
      <p className="label figures min-h-[1.4rem] overflow-hidden pt-0.5" aria-live="polite">
        {readOut ?? hint ?? "Point, touch or use the arrow keys to read values."}
      </p>
      <div id={tableId} hidden={!tableOpen} className="max-h-80 overflow-auto" tabIndex={tableOpen ? 0 : -1}>
        {tableOpen && table()}
      </div>
    </figure>
  );
}
