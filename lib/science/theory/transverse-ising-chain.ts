import { pairCount } from "@/lib/science/correlators/pairs";
import { symmetricEigen } from "@/lib/science/stats/symmetric-eigen";
import type { MajoranaLaw, SpinMoments } from "@/lib/science/theory/spin-law";

/** The chain's two matrices: x′ = B y, y′ = −Bᵀ x for the Majorana operators x_j = γ_{2j−1}, y_j = γ_{2j}. */
interface Flow {
  sites: number;
  coupling: number;
  field: number;
  /** Ascending eigenvalues ω² of B Bᵀ and its eigenvectors `[site][mode]`. */
  values: Float64Array;
  vectors: Float64Array;
}

/**
 * Returns the state at each time of an open chain under H = −J Σ σxσx − h Σ σz between neighbours, from all spins up
 * (Lieb, Schultz and Mattis 1961; Pfeuty 1970). `coupling` J and `field` h are angular, in radians per unit of `times`.
 */
export function isingFieldQuench(sites: number, coupling: number, field: number, times: Float64Array): MajoranaLaw[] {
  const product = new Float64Array(sites * sites);
  for (let j = 0; j < sites; j++) {
    product[j * sites + j] = 4 * (field * field + (j > 0 ? coupling * coupling : 0));
    if (j > 0) product[j * sites + j - 1] = product[(j - 1) * sites + j] = -4 * coupling * field;
  }
  const flow = { sites, coupling, field, ...symmetricEigen(product, sites) };
  return Array.from(times, (time) => ({ kind: "majorana", sites, covariance: covarianceAt(flow, time) }));
}

/** Γ(t) = R Γ₀ Rᵀ with R = e^{At} in blocks, where Γ₀ has −1 from every x_j to its y_j. */
function covarianceAt(flow: Flow, time: number): Float64Array {
  const { sites } = flow;
  const xx = modeFunction(flow, (omega) => Math.cos(omega * time));
  const sine = modeFunction(flow, (omega) => (omega * time < 1e-8 ? time : Math.sin(omega * time) / omega));
  const versine = modeFunction(flow, (omega) => {
    const half = Math.sin((omega * time) / 2);
    return omega * time < 1e-8 ? -(time * time) / 2 : (-2 * half * half) / (omega * omega);
  });
  const xy = timesB(flow, sine);
  const yx = transposed(xy, sites).map((value) => -value);
  const yy = transposed(timesB(flow, transposed(timesB(flow, versine), sites)), sites);
  for (let j = 0; j < sites; j++) yy[j * sites + j] += 1;
  // (Γ)_ac = −Σ_j (R_{a,xj} R_{c,yj} − R_{a,yj} R_{c,xj})
  const covariance = new Float64Array(4 * sites * sites);
  const blocks = [
    [xx, xy],
    [yx, yy],
  ];
  for (const [p, [aX, aY]] of blocks.entries()) {
    for (const [q, [cX, cY]] of blocks.entries()) {
      for (let i = 0; i < sites; i++) {
        for (let l = 0; l < sites; l++) {
          let sum = 0;
          for (let j = 0; j < sites; j++) sum += aY[i * sites + j] * cX[l * sites + j] - aX[i * sites + j] * cY[l * sites + j];
          covariance[(2 * i + p) * 2 * sites + 2 * l + q] = sum;
        }
      }
    }
  }
  return covariance;
}

/** U f(ω) Uᵀ */
function modeFunction({ sites, values, vectors }: Flow, f: (omega: number) => number): Float64Array {
  const weight = values.map((value) => f(Math.sqrt(Math.max(0, value))));
  const result = new Float64Array(sites * sites);
  for (let i = 0; i < sites; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = 0;
      for (let m = 0; m < sites; m++) sum += vectors[i * sites + m] * weight[m] * vectors[j * sites + m];
      result[i * sites + j] = result[j * sites + i] = sum;
    }
  }
  return result;
}

/** Returns matrix · B, where B has 2h on its diagonal and −2J below it. */
function timesB({ sites, coupling, field }: Flow, matrix: Float64Array): Float64Array {
  return matrix.map((value, at) => 2 * field * value - (at % sites < sites - 1 ? 2 * coupling * matrix[at + 1] : 0));
}

function transposed(matrix: Float64Array, sites: number): Float64Array {
  return matrix.map((_, at) => matrix[(at % sites) * sites + Math.floor(at / sites)]);
}

/** Returns ⟨σ_j⟩ and, by Wick's theorem, C_jl = −Γ_ac Γ_bd + Γ_ad Γ_bc for (a, b) of site j and (c, d) of site l. */
export function majoranaMoments({ sites, covariance }: MajoranaLaw): SpinMoments {
  const of = (a: number, b: number) => covariance[a * 2 * sites + b];
  const mean = Float64Array.from({ length: sites }, (_, j) => -of(2 * j, 2 * j + 1));
  const correlator = new Float64Array(pairCount(sites));
  let pair = 0;
  for (let j = 0; j < sites; j++) {
    for (let l = j + 1; l < sites; l++) {
      correlator[pair++] = of(2 * j, 2 * l + 1) * of(2 * j + 1, 2 * l) - of(2 * j, 2 * l) * of(2 * j + 1, 2 * l + 1);
    }
  }
  return { mean, correlator };
}
