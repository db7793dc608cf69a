"use client";

import { ChoiceField } from "@/components/forms/choice-field";
import { FormField } from "@/components/forms/form-field";
import { NullFrontChart } from "./null-front-chart";
import { SelfTestTable } from "./self-test-table";
import { Sentence } from "./sentence";
import { StudyCard } from "./study-card";
import type { StudyViews } from "./study-views";
import { SweepChart } from "./sweep-chart";

interface StudiesSectionProps {
  analysisId: string;
  views: StudyViews;
  /** The run's own nearest-neighbour model and coupling J/2π, for the form. */
  model: "xy" | "ising";
  jMaxHz: number | null;
  mayStart: boolean;
  mayCancel: boolean;
}

/** Three questions about a saved analysis: what hangs on its choices, whether the front beats a nearest-neighbour cone, whether its error bars hold here. */
export function StudiesSection({ analysisId, views, model, jMaxHz, mayStart, mayCancel }: StudiesSectionProps) {
  const { sweep, nullFront, selfTest } = views;
  const common = { analysisId, mayStart, mayCancel };
  return (
    <section aria-labelledby="studies" className="mt-9">
      <h2 id="studies">How much hangs on choices</h2>
      <div className="mt-3 grid grid-cols-1 gap-x-10 gap-y-8 lg:grid-cols-2">
        <StudyCard
          {...common}
          title="Sensitivity"
          question="Would β be another one with other thresholds, another level, other traces, times or methods? About 200 combinations, without a bootstrap."
          kind="sweep"
          view={sweep}
          button={sweep.done === null ? "Vary the choices" : null}
        >
          {sweep.done && (
            <>
              <Sentence sentence={sweep.done.result.sentence} warnings={[]} notes={sweep.done.result.notes} />
              <div className="mt-3">
                <SweepChart
                  sweep={sweep.done.result}
                  actions={
                    <a href={`/api/v1/studies/${sweep.done.id}?format=csv`} download>
                      CSV
                    </a>
                  }
                />
              </div>
            </>
          )}
        </StudyCard>
        <div className="min-w-0 space-y-8">
          <StudyCard
            {...common}
            title="Nearest-neighbour comparison"
            question="Is the front faster than that of a nearest-neighbour chain, seen at the same times, with the same shots, by the same rules?"
            kind="null-front"
            view={nullFront}
            button={nullFront.done === null ? "Compare" : "Compare again"}
            settings={<NullFrontSettings model={model} jMaxHz={jMaxHz} />}
            fieldsOf={nullFrontFields}
          >
            {nullFront.done && (
              <>
                <Sentence sentence={nullFront.done.result.sentence} warnings={nullFront.done.result.warnings} />
                {nullFront.done.result.fitted > 0 && (
                  <div className="mt-3">
                    <NullFrontChart result={nullFront.done.result} />
                  </div>
                )}
              </>
            )}
          </StudyCard>
          <StudyCard
            {...common}
            title="Self-test"
            question="Do the 95 % intervals hold the truth in simulated runs like this one, with this front, these shots and this readout?"
            kind="self-test"
            view={selfTest}
            button={selfTest.done === null ? "Test this analysis" : "Test again"}
            settings={<RepeatsSettings repeats={100} />}
            fieldsOf={repeatsFields}
          >
            {selfTest.done && (
              <>
                <Sentence sentence={selfTest.done.result.sentence} warnings={selfTest.done.result.warnings} />
                <div className="mt-3">
                  <SelfTestTable result={selfTest.done.result} />
                </div>
              </>
            )}
          </StudyCard>
        </div>
      </div>
    </section>
  );
}

const MODELS = [
  ["xy", "XY chain"],
  ["ising", "Ising chain, h = J"],
] as const;

function NullFrontSettings({ model, jMaxHz }: Pick<StudiesSectionProps, "model" | "jMaxHz">) {
  return (
    <>
      <ChoiceField label="Model" name="model" defaultValue={model} choices={MODELS} />
      <FormField label="J/2π (Hz)" name="jMaxHz" inputMode="decimal" defaultValue={jMaxHz ?? ""} hint="empty: matched to the first point" />
      <RepeatsSettings repeats={200} />
    </>
  );
}

function RepeatsSettings({ repeats }: { repeats: number }) {
  return (
    <>
      <FormField label="Simulated runs" name="repeats" inputMode="numeric" defaultValue={repeats} />
      <FormField label="Seed" name="seed" inputMode="numeric" defaultValue={1} />
    </>
  );
}

function repeatsFields(form: FormData): Record<string, unknown> {
  return { repeats: Number(form.get("repeats")), seed: Number(form.get("seed")) };
}

function nullFrontFields(form: FormData): Record<string, unknown> {
  const coupling = String(form.get("jMaxHz") ?? "").trim();
  return { ...repeatsFields(form), model: String(form.get("model")), jMaxHz: coupling === "" ? null : Number(coupling) };
}
