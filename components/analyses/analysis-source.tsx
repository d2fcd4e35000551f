'use client';

import { createContext, useContext } from 'react';

/** What every number of an analysis shares. */
export interface AnalysisSource {
  recording: string;
  sha256: string | null;
  recipe: string;
  seed: string;
  draws: string;
  codeVersion: string;
}

const Source = createContext<AnalysisSource | null>(null);

export const AnalysisSourceProvider = Source.Provider;

/** The source of the analysis around a component; null outside of one. */
export const useAnalysisSource = () => useContext(Source);
