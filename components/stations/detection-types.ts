import type { ModelComponents } from "@/lib/science/detection/count-model";

/** A saved detection as the API answers it; arrays are `[site]`. */
export interface DetectionAnswer {
  id: string;
  number: number;
  method: "fixed" | "mixture" | "calibration";
  label: string | null;
  /** The run version it was made on has been superseded. */
  stale: boolean;
  thresholds: number[];
  falseBright: (number | null)[];
  falseDark: (number | null)[];
  falseBrightInterval: ([number, number] | null)[];
  falseDarkInterval: ([number, number] | null)[];
  fidelity: (number | null)[];
  mixture: (ModelComponents | null)[];
  /** What the components of a mixture follow, and why; null without one. */
  model: { name: string; chosen: string; reason: string } | null;
  warnings: { code: string; message: string }[][];
  createdBy: string;
  createdAt: string;
}

/** Histograms as the API answers them. */
export interface HistogramsAnswer {
  sites: { site: number; firstBin: number; counts: number[] }[];
}
