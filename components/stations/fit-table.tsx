import type { ReactNode } from "react";
import { longForm, plainNumber, withUncertainty } from "@/lib/number-text";
import { isNoFit, type FrontResult, type LinearFront, type NoFit, type Parameter, type PowerLawFront } from "@/lib/science/front/front-result";

/** Both fits side by side in the trade's short form; the long form on hover. */
export function FitTable({ front }: { front: FrontResult }) {
  const { linear, powerLaw, comparison } = front;
  return (
    <div className="grid grid-cols-1 content-start gap-x-8 gap-y-5 sm:grid-cols-2 xl:grid-cols-1">
      <FitColumn title="Straight line" law={<>τ = t₀ + d / v</>} fit={linear} swatch="var(--ink)">
        {!isNoFit(linear) && (
          <>
            <ParameterRow name="v" unit="sites/ms" parameter={linear.v_sites_per_ms} />
            <ParameterRow name="t₀" unit="µs" parameter={linear.t0_us} />
          </>
        )}
      </FitColumn>
      <FitColumn title="Power law" law={<>d = a τ<sup>β</sup></>} fit={powerLaw} swatch="var(--front)">
        {!isNoFit(powerLaw) && (
          <>
            <ParameterRow name="β" unit="" parameter={powerLaw.beta} />
            <ParameterRow name="γ = 1/β" unit="" parameter={powerLaw.gamma} />
            <ParameterRow name="a" unit="sites/µsᵝ" parameter={powerLaw.a} />
          </>
        )}
      </FitColumn>
      {comparison.deltaBic !== null && (
        <p className="label figures sm:col-span-2 xl:col-span-1">
          Power law minus line: ΔAICc = {plainNumber(comparison.deltaAicc, 3)}, ΔBIC = {plainNumber(comparison.deltaBic, 3)}. Below zero speaks for the power law.
        </p>
      )}
    </div>
  );
}

interface FitColumnProps {
  title: string;
  law: ReactNode;
  fit: LinearFront | PowerLawFront | NoFit;
  swatch: string;
  children: ReactNode;
}

function FitColumn({ title, law, fit, swatch, children }: FitColumnProps) {
  return (
    <section>
      <h2 className="flex items-baseline gap-2 border-b border-rule pb-1 text-[1rem]">
        <span aria-hidden="true" className="inline-block h-[3px] w-5 self-center" style={{ background: swatch }} />
        <span className="font-[640]">{title}</span>
        <span className="label ml-auto italic">{law}</span>
      </h2>
      {isNoFit(fit) ? (
        <p className="mt-1 text-muted">{fit.reason}</p>
      ) : (
        <table className="figures w-full">
          <tbody>
            {children}
            <tr className="label">
              <th scope="row" className="py-0.5 font-normal">
                χ² / dof
              </th>
              <td className="text-right" colSpan={2}>
                {plainNumber(fit.chi2, 3)} / {fit.dof}, p = {plainNumber(fit.pValue, 2)}
              </td>
            </tr>
            <tr className="label">
              <th scope="row" className="py-0.5 font-normal">
                AICc, BIC
              </th>
              <td className="text-right" colSpan={2}>
                {plainNumber(fit.aicc, 3)}, {plainNumber(fit.bic, 3)}
              </td>
            </tr>
          </tbody>
        </table>
      )}
    </section>
  );
}

function ParameterRow({ name, unit, parameter }: { name: string; unit: string; parameter: Parameter }) {
  return (
    <tr title={longForm(parameter.value, parameter.error, parameter.low, parameter.high)}>
      <th scope="row" className="py-0.5">
        {name}
      </th>
      <td className="text-right text-[1.05rem] font-[600]">{withUncertainty(parameter.value, parameter.error)}</td>
      <td className="label w-24 pl-2">{unit}</td>
    </tr>
  );
}
