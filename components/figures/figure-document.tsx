import type { ReactNode } from "react";
import type { ChartTheme } from "@/components/charts/chart-theme";
import type { ChartSize } from "@/components/charts/plot-area";

interface FigureDocumentProps {
  /** In px of the drawing; text of 12 px stands 8 pt high at 86 mm. */
  size: ChartSize;
  width_mm: number;
  theme: ChartTheme;
  title: string;
  /** One sentence for readers who cannot see the figure. */
  description: string;
  /** Parameters and hashes, one `name: value` a line. */
  provenance: string[];
  children: ReactNode;
}

/** A figure as a file: real width in mm, title and description for screen readers, provenance as metadata. */
export function FigureDocument({ size, width_mm, theme, title, description, provenance, children }: FigureDocumentProps) {
  const height_mm = (width_mm * size.height) / size.width;
  return (
    <svg
      xmlns="http://www.w3.org/2000/svg"
      width={`${width_mm}mm`}
      height={`${Math.round(height_mm * 100) / 100}mm`}
      viewBox={`0 0 ${size.width} ${size.height}`}
      fontFamily={theme.font}
      fontVariant="tabular-nums"
      role="img"
    >
      <title>{title}</title>
      <desc>{description}</desc>
      <metadata>{`\n${provenance.join("\n")}\n`}</metadata>
      <rect width={size.width} height={size.height} fill={theme.paper} />
      {children}
    </svg>
  );
}
