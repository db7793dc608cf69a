import { ChoiceField } from "@/components/forms/choice-field";
import { FormField } from "@/components/forms/form-field";

const RULES = [
  ["fraction-of-max", "share f of the maximum"],
  ["fixed-level", "fixed level of C"],
  ["noise-multiple", "multiple of the noise"],
] as const;
const ESTIMATORS = [
  ["plug-in", "plug-in"],
  ["unbiased", "unbiased, M/(M − 1)"],
] as const;
const INTERVALS = [
  ["percentile", "percentile"],
  ["bca", "BCa"],
  ["basic", "basic (covers too little)"],
] as const;
const POWER_LAWS = [
  ["log-time", "ln τ"],
  ["time", "τ itself"],
] as const;
const COVARIANCES = [
  ["diagonal", "each point's own error"],
  ["bootstrap", "joint covariance (GLS)"],
] as const;

/** The choices most analyses leave alone; every one has the default of the definitions. */
export function AnalysisMoreChoices({ errorAt }: { errorAt: (where: string) => string | undefined }) {
  return (
    <details className="sm:col-span-2 lg:col-span-4">
      <summary className="cursor-pointer py-1 font-[550]">More choices</summary>
      <div className="mt-3 grid grid-cols-1 gap-4 sm:grid-cols-2 lg:grid-cols-4">
        <ChoiceField label="Level set by" name="rule" choices={RULES} />
        <FormField label="Samples to hold" name="hold" inputMode="numeric" defaultValue="2" hint="for the method “first samples”" error={errorAt("front.hold")} />
        <FormField label="Least signal" name="minSignal" inputMode="decimal" defaultValue="5" hint="in standard errors, to be resolved" error={errorAt("front.minSignal")} />
        <ChoiceField label="Power law fitted in" name="powerLawIn" choices={POWER_LAWS} />
        <ChoiceField label="Weights of the fits" name="covariance" choices={COVARIANCES} />
        <ChoiceField label="95 % intervals" name="interval" choices={INTERVALS} />
        <ChoiceField label="Estimator of C" name="estimator" choices={ESTIMATORS} />
        <FormField label="Block length" name="blockLength" inputMode="numeric" defaultValue="1" hint="shots in a row resampled together, against drift" error={errorAt("bootstrap.blockLength")} />
        <label className="flex min-h-9 items-center gap-2 sm:col-span-2">
          <input type="checkbox" name="throughOrigin" className="size-4 accent-(--ink)" />
          straight line through the origin
        </label>
        <label className="flex min-h-9 items-center gap-2 sm:col-span-2">
          <input type="checkbox" name="absolute" className="size-4 accent-(--ink)" />
          use |C|: noise no longer averages to zero
        </label>
      </div>
    </details>
  );
}
