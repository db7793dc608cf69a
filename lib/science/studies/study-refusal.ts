/** Why a study cannot be made: what stands in the way, by the name of an input, and a sentence for the reader. */
export interface StudyRefusal {
  readonly _tag: "StudyRefusal";
  where: string;
  message: string;
}

/** Returns a refusal. */
export function refuseStudy(where: string, message: string): StudyRefusal {
  return { _tag: "StudyRefusal", where, message };
}

/** Narrows a plan to its refusal. */
export function isStudyRefusal(value: object): value is StudyRefusal {
  return "_tag" in value && value._tag === "StudyRefusal";
}
