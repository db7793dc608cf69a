interface ExportLinksProps {
  analysisId: string;
  /** Null where no file shows the same picture. */
  figure: "map" | "traces" | "front" | "histograms" | null;
  /** The endpoint whose CSV holds the same numbers. */
  data: "traces" | "front" | "correlators";
  /** What the endpoint is asked for, such as "reference=3". */
  query?: string;
}

/** SVG of the figure and CSV of its numbers, both with parameters and hashes in the head. */
export function ExportLinks({ analysisId, figure, data, query = "" }: ExportLinksProps) {
  const base = `/api/v1/analyses/${analysisId}`;
  return (
    <>
      {figure && (
        <a href={`${base}/figures/${figure}.svg?width_mm=86`} download>
          SVG
        </a>
      )}
      <a href={`${base}/${data}?${query && `${query}&`}format=csv`} download>
        CSV
      </a>
    </>
  );
}
