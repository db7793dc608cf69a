import type { RandomStream } from "@/lib/science/stats/philox";

const LAYERS = 128;
const TAIL = 3.442619855899;
const LAYER_AREA = 9.91256303526217e-3;
const EDGES = layerEdges();
/** x_{l+1} / x_l, `[layer]` */
const INSIDE = Float64Array.from({ length: LAYERS }, (_, layer) => EDGES[layer + 1] / EDGES[layer]);

function layerEdges(): Float64Array {
  const edges = new Float64Array(LAYERS + 1);
  let density = Math.exp(-0.5 * TAIL * TAIL);
  edges[0] = LAYER_AREA / density;
  edges[1] = TAIL;
  for (let layer = 2; layer < LAYERS; layer++) {
    edges[layer] = Math.sqrt(-2 * Math.log(LAYER_AREA / edges[layer - 1] + density));
    density = Math.exp(-0.5 * edges[layer] * edges[layer]);
  }
  return edges;
}

/**
 * Fills `out` with independent standard normal draws by the ziggurat (Marsaglia and Tsang 2000, in Doornik's 2005 form
 * with separate bits for layer and value). Values are multiples of 2⁻²⁴ of a layer's width: meant for simulated noise,
 * several times quicker than inversion.
 */
export function fillWithNormals(out: Float64Array, stream: RandomStream): void {
  for (let m = 0; m < out.length; m++) {
    const word = stream.nextUint32();
    const layer = word & (LAYERS - 1);
    const share = ((word >> 8) + 0.5) / 0x800000;
    out[m] = Math.abs(share) < INSIDE[layer] ? share * EDGES[layer] : beyondLayer(layer, share, stream);
  }
}

/** The rest of one draw, in 1 of 80: the tail, or the wedge of its layer, and a new try when that is missed. */
function beyondLayer(first: number, firstShare: number, stream: RandomStream): number {
  let layer = first;
  let share = firstShare;
  for (;;) {
    if (Math.abs(share) < INSIDE[layer]) return share * EDGES[layer];
    if (layer === 0) return drawTail(share < 0, stream);
    const x = share * EDGES[layer];
    const above = Math.exp(-0.5 * (EDGES[layer] * EDGES[layer] - x * x));
    const below = Math.exp(-0.5 * (EDGES[layer + 1] * EDGES[layer + 1] - x * x));
    if (below + stream.nextUniform() * (above - below) < 1) return x;
    const word = stream.nextUint32();
    layer = word & (LAYERS - 1);
    share = ((word >> 8) + 0.5) / 0x800000;
  }
}

/** The normal law beyond ±3.44 (Marsaglia 1964). */
function drawTail(isNegative: boolean, stream: RandomStream): number {
  for (;;) {
    const x = -Math.log1p(-stream.nextUniform()) / TAIL;
    const y = -Math.log1p(-stream.nextUniform());
    if (2 * y > x * x) return isNegative ? -TAIL - x : TAIL + x;
  }
}
