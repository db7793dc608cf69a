import { GROUP_SITES } from "@/lib/science/correlators/bootstrap-layout";

/** Two groups of four sites that are counted together. */
export interface GroupPair {
  a: number;
  b: number;
  /** Whether the second group's own sites and pairs are counted too. */
  own: boolean;
  /** Whether the pairs of one site from each group are read; else they are read elsewhere or not needed. */
  across: boolean;
}

/**
 * Returns the group pairs to be counted so that every needed pair (`needed`, `[pair]`, in the order of the pair list) and both
 * its sites can be read: those that count a group's own sites first, each group's at most once. `groups` ≥ 2.
 */
export function groupPairsFor(sites: number, groups: number, needed: Uint8Array): GroupPair[] {
  const { touched, crossing } = groupsTouched(sites, groups, needed);
  const withOwn: GroupPair[] = [];
  const free = new Set(crossing);
  for (const group of touched) {
    const partner = Array.from({ length: groups }, (_, other) => other).find((other) => free.delete(keyOf(groups, group, other)));
    withOwn.push({ a: partner ?? (group + 1) % groups, b: group, own: true, across: partner !== undefined });
  }
  return [...withOwn, ...Array.from(free, (key) => ({ a: Math.floor(key / groups), b: key % groups, own: false, across: true }))];
}

/** The groups that any needed pair has a site in, and the pairs of different groups that one lies across. */
function groupsTouched(sites: number, groups: number, needed: Uint8Array) {
  const touched = new Set<number>();
  const crossing = new Set<number>();
  let pair = 0;
  for (let i = 0; i < sites; i++) {
    for (let j = i + 1; j < sites; j++, pair++) {
      if (needed[pair] === 0) continue;
      const [a, b] = [Math.floor(i / GROUP_SITES), Math.floor(j / GROUP_SITES)];
      touched.add(a).add(b);
      if (a !== b) crossing.add(keyOf(groups, a, b));
    }
  }
  return { touched, crossing };
}

function keyOf(groups: number, a: number, b: number): number {
  return Math.min(a, b) * groups + Math.max(a, b);
}
