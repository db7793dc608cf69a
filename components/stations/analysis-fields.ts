/** Returns the request body of a new analysis from the form's fields; what is no number is sent as typed, for the server to name. */
export function analysisFields(form: FormData, detectionId: string): Record<string, unknown> {
  const text = (name: string) => String(form.get(name) ?? "").trim();
  const number = (name: string) => (Number.isFinite(Number(text(name))) && text(name) !== "" ? Number(text(name)) : text(name));
  const ticked = (name: string) => form.get(name) === "on";
  return {
    detectionId,
    reading: text("reading"),
    readoutCorrection: ticked("readoutCorrection"),
    estimator: text("estimator"),
    bootstrap: { replicates: number("replicates"), seed: number("seed"), interval: text("interval"), blockLength: number("blockLength") },
    traces: text("traces") === "distance" ? { kind: "distance" } : { kind: "reference", site: Number(text("traces")) },
    front: {
      rule: text("rule"),
      level: number("level"),
      method: text("method"),
      hold: number("hold"),
      minSignal: number("minSignal"),
      absolute: ticked("absolute"),
      throughOrigin: ticked("throughOrigin"),
      powerLawIn: text("powerLawIn"),
      covariance: text("covariance"),
    },
  };
}
