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

/** Two groups of four sites; `own` marks the one pair of groups that also counts the second group's own sites. */
export interface GroupPair {
  a: number;
  b: number;
  own: boolean;
}

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

/** Returns the group pairs, those that count a group's own sites first. Needs at least three groups. */
export function listGroupPairs(groups: number): GroupPair[] {
  const pairs: GroupPair[] = [];
  for (let b = 0; b < groups; b++) pairs.push({ a: (b + 1) % groups, b, own: true });
  for (let a = 0; a < groups; a++) {
    for (let b = a + 2; b < groups; b++) {
      if (!(a === 0 && b === groups - 1)) pairs.push({ a, b, own: false });
    }
  }
  return pairs;
}

/** Returns the layout for one evolution time; `traces` is the number of traces. */
export function layOutBootstrap(shots: number, sites: number, replicates: number, traces: number): BootstrapLayout {
  const groups = Math.max(3, Math.ceil(sites / GROUP_SITES));
  const blocks = Math.ceil(replicates / BLOCK_REPLICATES);
  const padded = blocks * BLOCK_REPLICATES;
  const rowBytes = padded * 4;
  const valueBytes = padded * 8;
  const chunks = cutIntoChunks(shots);
  const listBytes = LIST_HEADER_BYTES + FILL_BYTES + 4 * Math.min(shots, CHUNK_SHOTS);
  const largestTile = Math.floor(TILE_BYTES / Math.max(PAIR_ROWS * rowBytes, listBytes * chunks.length));
  const groupPairsPerTile = Math.min((groups * (groups - 1)) / 2, Math.max(groups, largestTile));
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
