/**
 * Shots sorted by what eight sites read. Sites go in groups of four, so two groups have 256 joint patterns; a list
 * names the rows of each pattern, in quads, patterns with equally many quads together (loops then end predictably).
 */

const PATTERNS: u32 = 256;
const LONGEST: u32 = 255;

/** Writes each shot's four-bit reading of the group whose four sites' packed words start at `words` to `nibbles`. */
export function readGroup(words: usize, wordsPerSite: u32, shots: u32, nibbles: usize): void {
  const stride = usize(wordsPerSite) << 2;
  for (let s: u32 = 0; s < shots; s++) {
    const word = words + (usize(s >> 5) << 2);
    const bit = s & 31;
    const low = ((load<u32>(word) >> bit) & 1) | (((load<u32>(word + stride) >> bit) & 1) << 1);
    const high = ((load<u32>(word + 2 * stride) >> bit) & 1) | (((load<u32>(word + 3 * stride) >> bit) & 1) << 1);
    store<u8>(nibbles + s, low | (high << 2));
  }
}

/**
 * Writes the list of shots first … end − 1 to `list`: 256 u32 `pattern | quads << 8`, then where the shots' rows in
 * `weights` lie, in the same order, each pattern filled up to whole quads with `emptyRow`. A pattern is a + 16 b for
 * the readings a of the first group and b of the second. `scratch` holds 768 u32.
 */
export function listPatterns(
  a: usize, b: usize, first: u32, end: u32, weights: usize, emptyRow: usize, list: usize, scratch: usize,
): void {
  const counts = scratch;
  const places = scratch + 1024;
  memory.fill(counts, 0, 1024);
  for (let s = first; s < end; s++) {
    const count = counts + (usize(patternOf(a, b, s)) << 2);
    store<u32>(count, load<u32>(count) + 1);
  }
  orderByQuads(counts, list, scratch + 2048);
  let place = list + 1024;
  for (let n: usize = 0; n < PATTERNS; n++) {
    const entry = load<u32>(list + (n << 2));
    const pattern = usize(entry & 255) << 2;
    const quads = usize(entry >> 8);
    store<u32>(places + pattern, u32(place));
    const next = place + (quads << 4);
    for (let gap = place + (usize(load<u32>(counts + pattern)) << 2); gap < next; gap += 4) store<u32>(gap, u32(emptyRow));
    place = next;
  }
  for (let s = first; s < end; s++) {
    const slot = places + (usize(patternOf(a, b, s)) << 2);
    const at = load<u32>(slot);
    store<u32>(at, u32(weights) + (s << 5));
    store<u32>(slot, at + 4);
  }
}

// @ts-ignore: decorator
@inline
function patternOf(a: usize, b: usize, s: u32): u32 {
  return u32(load<u8>(a + s)) | (u32(load<u8>(b + s)) << 4);
}

/** Counting sort of the patterns by their number of quads, all above 254 as one. */
function orderByQuads(counts: usize, order: usize, starts: usize): void {
  memory.fill(starts, 0, 1024);
  for (let p: usize = 0; p < PATTERNS; p++) {
    const slot = starts + (usize(sortKey(counts, p)) << 2);
    store<u32>(slot, load<u32>(slot) + 1);
  }
  let sum: u32 = 0;
  for (let n: usize = 0; n < PATTERNS; n++) {
    const slot = starts + (n << 2);
    const size = load<u32>(slot);
    store<u32>(slot, sum);
    sum += size;
  }
  for (let p: usize = 0; p < PATTERNS; p++) {
    const slot = starts + (usize(sortKey(counts, p)) << 2);
    const at = load<u32>(slot);
    store<u32>(slot, at + 1);
    store<u32>(order + (usize(at) << 2), u32(p) | (quadsOf(counts, p) << 8));
  }
}

// @ts-ignore: decorator
@inline
function quadsOf(counts: usize, pattern: usize): u32 {
  return (load<u32>(counts + (pattern << 2)) + 3) >> 2;
}

// @ts-ignore: decorator
@inline
function sortKey(counts: usize, pattern: usize): u32 {
  return min(quadsOf(counts, pattern), LONGEST);
}
