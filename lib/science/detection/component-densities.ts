import { RICHER_MODELS, type CountModel, type ModelComponents } from "@/lib/science/detection/count-model";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";

/** P(n | dark) and P(n | bright) of a whole count n. */
export interface ComponentDensities {
  dark: (n: number) => number;
  bright: (n: number) => number;
}

/** Returns the two count laws of fitted components: with leakage where a leak is given, negative binomial where an excess is, else Poisson. */
export function componentDensities(components: ModelComponents): ComponentDensities {
  const model = modelOf(components);
  if (model === null) return { dark: (n) => poissonDensity(n, components.dark), bright: (n) => poissonDensity(n, components.bright) };
  return { dark: (n) => model.darkDensity(n, components), bright: (n) => model.brightDensity(n, components) };
}

function modelOf({ leakDark, leakBright, darkExcess, brightExcess }: ModelComponents): CountModel | null {
  if (leakDark !== undefined || leakBright !== undefined) return RICHER_MODELS.leakage;
  return darkExcess !== undefined || brightExcess !== undefined ? RICHER_MODELS["negative-binomial"] : null;
}
