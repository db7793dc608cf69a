"use client";

import {
  createColumnHelper,
  createFilteredRowModel,
  createSortedRowModel,
  filterFns,
  globalFilteringFeature,
  columnFilteringFeature,
  rowSortingFeature,
  sortFns,
  tableFeatures,
  useTable,
} from "@tanstack/react-table";
import Link from "next/link";
import { useUrlState } from "@/components/shell/use-url-state";
import { groupedCount, longForm, plainNumber, withUncertainty } from "@/lib/number-text";
import { MapThumbnail } from "./map-thumbnail";
import type { RunRow } from "./run-row";
import { RunState } from "./run-state";
import { SortButton } from "./sort-button";

const features = tableFeatures({
  rowSortingFeature,
  columnFilteringFeature,
  globalFilteringFeature,
  sortedRowModel: createSortedRowModel(),
  filteredRowModel: createFilteredRowModel(),
  sortFns,
  filterFns,
});
const helper = createColumnHelper<typeof features, RunRow>();

const MODEL_NAMES: Record<RunRow["model"], string> = { ising: "Ising", xy: "XY", other: "other" };
/** Columns that a narrow screen leaves out; the run's own page has them. */
const WIDE_ONLY = new Set(["createdAt", "sites", "times", "shotsKept", "model", "alpha"]);
const NUMERIC = new Set(["sites", "times", "shotsKept", "alpha", "beta"]);
/** Words that follow a column of figures keep their distance from it. */
const AFTER_FIGURES = new Set(["model", "status"]);

const columns = helper.columns([
  helper.display({
    id: "map",
    header: "",
    cell: ({ row }) => <Thumbnail row={row.original} />,
  }),
  helper.accessor("title", { header: "Run", cell: ({ row }) => <TitleCell row={row.original} />, sortFn: "alphanumeric" }),
  helper.accessor("createdAt", { header: "Date", cell: ({ getValue }) => <time dateTime={getValue()}>{getValue().slice(0, 10)}</time> }),
  helper.accessor((row) => row.sites ?? 0, { id: "sites", header: "Sites", cell: ({ getValue }) => getValue() || "–" }),
  helper.accessor("times", { header: "Times", cell: ({ getValue }) => getValue() || "–" }),
  helper.accessor("shotsKept", { header: "Shots kept", cell: ({ row }) => <ShotsCell row={row.original} /> }),
  helper.accessor((row) => MODEL_NAMES[row.model], { id: "model", header: "Model" }),
  helper.accessor((row) => row.alpha ?? -1, { id: "alpha", header: "α", cell: ({ row }) => plainNumber(row.original.alpha, 3) }),
  helper.accessor((row) => row.analysis?.beta?.value ?? -1, { id: "beta", header: "β", cell: ({ row }) => <BetaCell row={row.original} /> }),
  helper.accessor("status", { header: "State", cell: ({ row }) => <RunState row={row.original} /> }),
]);

/** The group's runs: dense, sortable, searchable; the search stands in the address. */
export function RunsTable({ rows }: { rows: RunRow[] }) {
  const [search, setSearch] = useUrlState("search", "");
  const table = useTable({
    features,
    columns,
    data: rows,
    getRowId: (row) => row.id,
    state: { globalFilter: search },
    globalFilterFn: matches,
    getColumnCanGlobalFilter: (column) => column.id === "title",
    initialState: { sorting: [{ id: "createdAt", desc: true }] },
  });
  const shown = table.getRowModel().rows;
  return (
    <>
      <div className="mb-2 flex flex-wrap items-baseline gap-4">
        <label className="block w-full sm:w-72">
          <span className="sr-only">Search the runs</span>
          <input type="search" className="field" placeholder="Search title, campaign, model, person" value={search} onChange={(event) => setSearch(event.target.value)} />
        </label>
        <p className="label figures" aria-live="polite">
          {search ? `${shown.length} of ${rows.length} runs` : `${rows.length} ${rows.length === 1 ? "run" : "runs"}`}
        </p>
      </div>
      <table className="hairline-table figures">
        <thead>
          {table.getHeaderGroups().map((group) => (
            <tr key={group.id}>
              {group.headers.map((header) => (
                <th
                  key={header.id}
                  scope="col"
                  aria-sort={ariaSort(header.column.getIsSorted())}
                  className={`${cellClass(header.id)} ${NUMERIC.has(header.id) ? "sm:[&_span]:order-first" : ""}`}
                >
                  {header.column.getCanSort() ? (
                    <SortButton sorted={header.column.getIsSorted()} onClick={() => header.column.toggleSorting()}>
                      <table.FlexRender header={header} />
                    </SortButton>
                  ) : (
                    <span className="sr-only">Map</span>
                  )}
                </th>
              ))}
            </tr>
          ))}
        </thead>
        <tbody>
          {shown.map((row) => (
            <tr key={row.id} className="hover:bg-well">
              {row.getAllCells().map((cell) => (
                <td
                  key={cell.id}
                  className={cellClass(cell.column.id)}
                >
                  <table.FlexRender cell={cell} />
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
      {shown.length === 0 && rows.length > 0 && (
        <p className="py-6 text-muted">
          No run matches “{search}”.{" "}
          <button type="button" className="underline" onClick={() => setSearch("")}>
            Show all runs
          </button>
        </p>
      )}
    </>
  );
}

function cellClass(column: string): string {
  return [
    WIDE_ONLY.has(column) && "hidden lg:table-cell",
    NUMERIC.has(column) && "text-right",
    AFTER_FIGURES.has(column) && "pl-6!",
    column === "map" && "hidden w-28 sm:table-cell",
  ]
    .filter(Boolean)
    .join(" ");
}

function matches(row: { original: RunRow }, _column: string, search: string): boolean {
  const { title, campaign, model, createdBy, createdAt, status } = row.original;
  const text = [title, campaign ?? "", MODEL_NAMES[model], createdBy, createdAt, status].join(" ").toLowerCase();
  return search.toLowerCase().split(/\s+/).every((word) => text.includes(word));
}

function ariaSort(sorted: false | "asc" | "desc"): "ascending" | "descending" | undefined {
  if (sorted === false) return undefined;
  return sorted === "asc" ? "ascending" : "descending";
}

function Thumbnail({ row }: { row: RunRow }) {
  if (!row.analysis?.thumbnail) return <div aria-hidden="true" className="h-9 w-24 border border-dashed border-hairline" />;
  return <MapThumbnail {...row.analysis.thumbnail} width={96} height={36} />;
}

function TitleCell({ row }: { row: RunRow }) {
  return (
    <>
      <Link href={`/runs/${row.id}`} className="font-[600] break-words">
        {row.title}
      </Link>
      <span className="label block">
        {row.campaign && <>{row.campaign} · </>}
        <span className="lg:hidden">{row.createdAt.slice(0, 10)} · </span>
        {row.createdBy}
      </span>
      {row.analysis && <span className="block text-sm lg:hidden">{row.analysis.verdict}</span>}
    </>
  );
}

function ShotsCell({ row }: { row: RunRow }) {
  if (row.shotsKept === 0) return "–";
  const aside = row.shotsSetAside > 0 ? `${groupedCount(row.shotsSetAside)} set aside` : undefined;
  return <span title={aside}>{groupedCount(row.shotsKept)}</span>;
}

function BetaCell({ row }: { row: RunRow }) {
  const beta = row.analysis?.beta;
  if (!row.analysis) return <span className="text-muted">–</span>;
  if (!beta) return <span className="label">no fit</span>;
  return (
    <span title={`${row.analysis.verdict}; ${longForm(beta.value, beta.error, beta.low, beta.unbounded ? null : beta.high)}`} className="font-[600]">
      {withUncertainty(beta.value, beta.error)}
    </span>
  );
}
