import type { Rule } from "eslint";

export declare const MAY_IMPORT: Record<string, string[]>;
export declare function roomOf(repositoryPath: string): string | null;
export declare function directionFault(importer: string, imported: string): string | null;
export declare const importDirection: Rule.RuleModule;
