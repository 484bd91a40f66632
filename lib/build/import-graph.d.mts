import type { Rule } from 'eslint';

export function importsOf(text: string, file: string, root: string): string[];
export function cycleThrough(file: string, importsOfFile: (file: string) => readonly string[]): string[] | null;
export const noCycle: Rule.RuleModule;
