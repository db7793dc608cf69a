/** The distribution of one shot's spins, in a form that shots can be drawn from. All numbers are real. */
export type SpinLaw = DeterminantLaw | MajoranaLaw | GaussianLaw;

/** Free fermions of fixed number: P(all of a set are up) is the minor of the projection on that set. */
export interface DeterminantLaw {
  kind: "determinant";
  sites: number;
  /** `[site][site]`, symmetric, with eigenvalues 0 and 1. */
  projection: Float64Array;
}

/** A fermionic Gaussian state by Γ of ⟨γ_a γ_b⟩ = δ_ab − iΓ_ab; ⟨σz_j⟩ = −Γ of the site's own two Majorana operators. */
export interface MajoranaLaw {
  kind: "majorana";
  sites: number;
  /** `[2 · site + (0 for x, 1 for y)][…]`, antisymmetric. */
  covariance: Float64Array;
}

/** Spins of given means and pair correlations: spin i is up where a correlated normal variable lies below its threshold. */
export interface GaussianLaw {
  kind: "gaussian";
  sites: number;
  /** `[site][site]`, lower Cholesky factor of the latent correlations. */
  factor: Float64Array;
  /** `[site]`, Φ⁻¹((1 + ⟨σ_i⟩)/2) */
  threshold: Float64Array;
}

/** The means and connected correlators of a law. */
export interface SpinMoments {
  /** `[site]`, ⟨σ_i⟩ */
  mean: Float64Array;
  /** `[pair]`, C_ij of i < j in lexicographic order. */
  correlator: Float64Array;
}
