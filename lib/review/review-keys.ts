import { z } from 'zod';

/** What a key does on the review desk, and the key that does it unless a person chose another. */
export const REVIEW_ACTIONS = {
  yes: { words: 'Yes', key: '1' },
  no: { words: 'No', key: '2' },
  'cannot-tell': { words: 'Can’t tell', key: '3' },
  depth: { words: 'Reason: they pass at different depths', key: 'a' },
  link: { words: 'Reason: the link is wrong near the closest frame', key: 'b' },
  merged: { words: 'Reason: the spots merge', key: 'c' },
  few: { words: 'Reason: too few points on one side', key: 'd' },
  other: { words: 'Reason: other, in words', key: 'f' },
  note: { words: 'Write a note', key: 'w' },
  back: { words: 'Back to the one before', key: 'u' },
  later: { words: 'Leave for later', key: 'n' },
  play: { words: 'Play the frames', key: 'p' },
} as const;
export type ReviewAction = keyof typeof REVIEW_ACTIONS;
export type ReviewKeys = Record<ReviewAction, string>;

const ACTIONS = Object.keys(REVIEW_ACTIONS) as ReviewAction[];

const keySchema = z.string().regex(/^[\p{L}\p{N}]$/u, 'Choose one letter or digit.');

/** Keys that a person chose; those left out stay as they are. No key may do two things. */
export const reviewKeysSchema = z
  .partialRecord(
    z.enum(ACTIONS),
    keySchema.transform((key) => key.toLowerCase()),
  )
  .superRefine((chosen, context) => {
    const twice = doubledKey(withDefaults(chosen));
    if (twice) {
      context.addIssue({
        code: 'custom',
        path: [twice.action],
        message: `The key ${twice.key} already does something else: ${REVIEW_ACTIONS[twice.first].words}.`,
      });
    }
  });

const withDefaults = (chosen: Partial<Record<ReviewAction, string>>): ReviewKeys =>
  Object.fromEntries(ACTIONS.map((action) => [action, chosen[action] ?? REVIEW_ACTIONS[action].key])) as ReviewKeys; // prettier-ignore

function doubledKey(keys: ReviewKeys): { action: ReviewAction; first: ReviewAction; key: string } | null {
  const taken = new Map<string, ReviewAction>();
  for (const action of ACTIONS) {
    const first = taken.get(keys[action]);
    if (first) return { action, first, key: keys[action] };
    taken.set(keys[action], action);
  }
  return null;
}

/** The keys that hold for a person; what is stored and makes no sense any more is left aside. */
export function reviewKeysOf(stored: unknown): ReviewKeys {
  const parsed = reviewKeysSchema.safeParse(stored ?? {});
  return withDefaults(parsed.success ? parsed.data : {});
}

/** What a pressed key does; null for nothing. */
export function actionOfKey(keys: ReviewKeys, key: string): ReviewAction | null {
  const pressed = key.toLowerCase();
  return ACTIONS.find((action) => keys[action] === pressed) ?? null;
}
