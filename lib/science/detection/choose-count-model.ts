import { RICHER_MODELS, type CountModelName } from "@/lib/science/detection/count-model";
import { fitCountModel } from "@/lib/science/detection/count-model-fit";
import { tallyCounts } from "@/lib/science/detection/count-tally";
import { poissonModel, richerModel, type FittedModel } from "@/lib/science/detection/fitted-model";
import type { OneComponent, TwoComponents } from "@/lib/science/detection/poisson-mixture";
import { bic } from "@/lib/science/stats/information-criteria";

/** The model a detection rests on, and why it was taken. */
export interface ChosenModel {
  name: CountModelName;
  chosen: "bic" | "by-hand";
  /** BIC summed over the sites that show two components, of each model that was tried. */
  bic: { name: CountModelName; value: number }[];
  /** One plain sentence. */
  reason: string;
}

export interface ModelChoice {
  model: ChosenModel;
  /** `[site]`; sites without two components keep what was found. */
  fits: (FittedModel | OneComponent | null)[];
}

const NAMES: Record<CountModelName, string> = {
  poisson: "two Poisson components",
  leakage: "Poisson components with leakage",
  "negative-binomial": "negative binomial components",
};
/** A richer model is taken only when its BIC is clearly the lower one (Kass and Raftery 1995: more than 10 is very strong). */
const CLEAR = 10;
/** Longer histograms are taken as they are: the densities of leakage would be summed over every count. */
const MOST_COUNTS = 4096;

/** So many sites, evenly among those with two components, decide for the run. */
const MOST_DECIDING = 24;

type Fits = (FittedModel | OneComponent | null)[];

/**
 * Returns the fits under the asked model, or under the one that BIC chooses for the run: the sum over sites (24 of them at most) of
 * −2 ln L + p ln M, two Poisson components unless a richer model is lower by more than 10. `frequencies` is `[site][count]`, `poisson` the
 * mixtures fitted to them.
 */
export function chooseCountModel(
  frequencies: readonly ArrayLike<number>[],
  poisson: readonly (TwoComponents | OneComponent | null)[],
  asked: CountModelName | "auto",
): ModelChoice {
  const base: Fits = poisson.map((fit) => (fit?.kind === "two-components" ? poissonModel(fit) : fit));
  const names: CountModelName[] = asked === "poisson" || longest(frequencies) > MOST_COUNTS ? ["poisson"] : ["poisson", "leakage", "negative-binomial"];
  const deciding = evenlyAmong(Array.from(base.keys()).filter((site) => base[site]?.kind === "two-components"), MOST_DECIDING);
  const fitted = (name: CountModelName, sites: readonly number[]): Fits => sites.map((site) => modelFit(name, base[site], poisson[site], frequencies[site]));
  const values = names.map((name) => ({ name, value: totalBic(fitted(name, deciding)) }));
  const name = asked !== "auto" && names.includes(asked) ? asked : leastBic(values);
  const reason = reasonOf(name, asked, values, deciding.length);
  const fits = name === "poisson" ? base : fitted(name, Array.from(base.keys()));
  return { model: { name, chosen: asked === "auto" ? "bic" : "by-hand", bic: values, reason }, fits };
}

function evenlyAmong(sites: readonly number[], most: number): number[] {
  if (sites.length <= most) return [...sites];
  return Array.from({ length: most }, (_, n) => sites[Math.floor((n * sites.length) / most)]);
}

function longest(frequencies: readonly ArrayLike<number>[]): number {
  return frequencies.reduce((most, { length }) => Math.max(most, length), 0);
}

function modelFit(
  name: CountModelName,
  base: FittedModel | OneComponent | null,
  poisson: TwoComponents | OneComponent | null,
  frequencies: ArrayLike<number>,
): FittedModel | OneComponent | null {
  if (name === "poisson" || poisson?.kind !== "two-components") return base;
  const model = RICHER_MODELS[name];
  return richerModel(model, fitCountModel(model, tallyCounts(frequencies), model.start(poisson)), poisson.shots);
}

function totalBic(fits: Fits): number {
  return fits.reduce((sum, fit) => (fit?.kind === "two-components" ? sum + bic(-2 * fit.logLikelihood, fit.parameters, fit.shots) : sum), 0);
}

function leastBic(values: readonly { name: CountModelName; value: number }[]): CountModelName {
  const [poisson, ...richer] = values;
  const best = richer.reduce((least, candidate) => (candidate.value < least.value ? candidate : least), poisson);
  return best.value < poisson.value - CLEAR ? best.name : "poisson";
}

function reasonOf(name: CountModelName, asked: CountModelName | "auto", values: readonly { name: CountModelName; value: number }[], sites: number): string {
  if (values.length === 1) return asked === "poisson" ? `Taken by hand: ${NAMES.poisson}.` : `${capital(NAMES.poisson)}: counts above ${MOST_COUNTS} are described by no other model here.`;
  const [{ value: reference }] = values;
  const differences = values.slice(1).map((candidate) => `${NAMES[candidate.name]} ${signed(candidate.value - reference)}`);
  const against = `BIC against ${NAMES.poisson}, summed over ${sites} ${sites === 1 ? "site" : "sites"}: ${differences.join(", ")}`;
  if (asked !== "auto") return `Taken by hand: ${NAMES[name]}. ${against}.`;
  return name === "poisson" ? `${capital(NAMES.poisson)}, since no richer model lowers BIC by more than ${CLEAR}. ${against}.` : `${capital(NAMES[name])}, whose BIC is the lowest. ${against}.`;
}

function signed(value: number): string {
  return `${value < 0 ? "−" : "+"}${Math.abs(value).toFixed(0)}`;
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}
