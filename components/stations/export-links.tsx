interface ExportLinksProps {
  analysisId: string;
  figure: "map" | "traces" | "front" | "histograms";
  /** The endpoint whose CSV holds the same numbers. */
  data: "traces" | "front" | "correlators";
}

/** SVG of the figure and CSV of its numbers, both with parameters and hashes in the head. */
export function ExportLinks({ analysisId, figure, data }: ExportLinksProps) {
  const base = `/api/v1/analyses/${analysisId}`;
  return (
    <>
      <a href={`${base}/figures/${figure}.svg?width_mm=86`} download>
        SVG
      </a>
      <a href={`${base}/${data}?format=csv`} download>
        CSV
      </a>
    </>
  );
}
