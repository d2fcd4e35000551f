import { type StackRefusal } from './refusal';
import { type RefusedStack } from './stack-report';

/** The report of a stack that can't be used. */
export function refusedReport({ code, detail, offer }: StackRefusal): RefusedStack {
  const hasOffer = Object.keys(offer).length > 0;
  return {
    state: 'refused',
    frames: 0,
    width: 0,
    height: 0,
    bitDepth: 0,
    sampleKind: null,
    sha256: null,
    warnings: [],
    refusal: hasOffer ? { code, detail, offer } : { code, detail },
    metadata: {},
    imageQuality: null,
  };
}
