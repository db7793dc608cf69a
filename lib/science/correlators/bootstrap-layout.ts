import { wordsPerSite } from "@/lib/science/correlators/packed-spins";

/** Replicates that are drawn and counted together. */
export const BLOCK_REPLICATES = 32;
/** Sites whose readings are looked at together. */
export const GROUP_SITES = 4;
/** Rows of counts a group has of its own: four sites and six pairs. */
export const OWN_ROWS = 10;
/** Rows of counts of two groups: one for each pair of sites. */
export const PAIR_ROWS = 16;

/** Below this many shots, sums of multiplicities stay within 16 bits: twice as many would have to be drawn. */
const CHUNK_SHOTS = 32768;
const LIST_HEADER_BYTES = 1024;
const FILL_BYTES = 3 * 256 * 4;
/** A tile's counts and lists stay below this each, so that 256 sites or many replicates fit into memory. */
const TILE_BYTES = 24 * 2 ** 20;

/** Sizes, and where everything lies in the kernel's memory (byte offsets). */
export interface BootstrapLayout {
  shots: number;
  sites: number;
  replicates: number;
  groups: number;
  blocks: number;
  /** Group pairs counted in one pass over the replicates. */
  groupPairsPerTile: number;
  /** Bytes of a row of counts, `[replicate]` i32. */
  rowBytes: number;
  /** Bytes of a row of values, `[replicate]` float64. */
  valueBytes: number;
  /** Bytes of a group pair's list of shots of one chunk. */
  listBytes: number;
  chunks: { first: number; end: number }[];
  fineTable: number;
  scratch: number;
  sums: number;
  bins: number;
  binSizes: number;
  sorted: number;
  values: number;
  words: number;
  nibbles: number;
  weights: number;
  /** An all-zero row after the weights. */
  emptyRow: number;
  factors: number;
  offsets: number;
  traces: number;
  ownRows: number;
  pairRows: number;
  lists: number;
  bytes: number;
}

/** Returns how many groups of four the sites make; at least two, so that there is a pair of them. */
export function groupCount(sites: number): number {
  return Math.max(2, Math.ceil(sites / GROUP_SITES));
}

/** Returns the layout for one evolution time with so many group pairs and traces. */
export function layOutBootstrap(shots: number, sites: number, replicates: number, groupPairs: number, traces: number): BootstrapLayout {
  const groups = groupCount(sites);
  const blocks = Math.ceil(replicates / BLOCK_REPLICATES);
  const padded = blocks * BLOCK_REPLICATES;
  const rowBytes = padded * 4;
  const valueBytes = padded * 8;
  const chunks = cutIntoChunks(shots);
  const listBytes = LIST_HEADER_BYTES + FILL_BYTES + 4 * Math.min(shots, CHUNK_SHOTS);
  const largestTile = Math.floor(TILE_BYTES / Math.max(PAIR_ROWS * rowBytes, listBytes * chunks.length));
  const groupPairsPerTile = Math.min(groupPairs, Math.max(groups, largestTile));
  const drawnRows = Math.ceil(shots / 4) * 4;
  // Offset 0 would read as "none".
  let bytes = 64;
  const reserve = (size: number) => {
    const at = bytes;
    bytes = Math.ceil((bytes + size) / 64) * 64;
    return at;
  };
  return {
    shots,
    sites,
    replicates,
    groups,
    blocks,
    groupPairsPerTile,
    rowBytes,
    valueBytes,
    listBytes,
    chunks,
    fineTable: reserve(64),
    scratch: reserve(11264),
    sums: reserve(256 * 64),
    bins: reserve(padded),
    binSizes: reserve(1024),
    sorted: reserve(valueBytes),
    values: reserve(valueBytes),
    words: reserve(groups * GROUP_SITES * wordsPerSite(shots) * 4),
    nibbles: reserve(groups * shots),
    weights: reserve(drawnRows * BLOCK_REPLICATES),
    emptyRow: reserve(BLOCK_REPLICATES),
    factors: reserve(sites * valueBytes),
    offsets: reserve(sites * valueBytes),
    traces: reserve(traces * valueBytes),
    ownRows: reserve(groups * OWN_ROWS * rowBytes),
    pairRows: reserve(groupPairsPerTile * PAIR_ROWS * rowBytes),
    lists: reserve(groupPairsPerTile * chunks.length * listBytes),
    bytes,
  };
}

function cutIntoChunks(shots: number): { first: number; end: number }[] {
  return Array.from({ length: Math.ceil(shots / CHUNK_SHOTS) }, (_, n) => ({
    first: n * CHUNK_SHOTS,
    end: Math.min(shots, (n + 1) * CHUNK_SHOTS),
  }));
}
