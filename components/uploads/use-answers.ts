import { useCallback, useState } from 'react';
import type { Preview } from '@/lib/schemas/upload';
import { firstAnswers, type MappingAnswers } from './mapping-form';

interface Step {
  answers: MappingAnswers;
  /** What was being typed in; further letters in it belong to the same step. */
  field: string | null;
}

export interface Answers {
  answers: MappingAnswers;
  /** Takes a step; steps in one `field` that follow each other are one. */
  change: (make: (now: MappingAnswers) => MappingAnswers, field?: string) => void;
  /** Goes back a step. */
  undo: () => void;
  changed: boolean;
}

/** The answers of a mapping, and the way back through them. */
export function useAnswers(preview: Preview): Answers {
  const [steps, setSteps] = useState<readonly Step[]>(() => [{ answers: firstAnswers(preview), field: null }]);
  const change = useCallback((make: (now: MappingAnswers) => MappingAnswers, field: string | null = null) => {
    setSteps((past) => {
      const last = past.at(-1);
      if (last === undefined) return past;
      const next = { answers: make(last.answers), field };
      return field !== null && last.field === field ? [...past.slice(0, -1), next] : [...past, next];
    });
  }, []);
  const undo = useCallback(() => setSteps((past) => (past.length > 1 ? past.slice(0, -1) : past)), []);
  return { answers: steps.at(-1)?.answers ?? firstAnswers(preview), change, undo, changed: steps.length > 1 };
}
