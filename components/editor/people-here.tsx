'use client';

/** Someone who has the same tracks open. */
export interface PersonHere {
  id: string;
  name: string;
  /** Frame that they look at, where it is known. */
  frame: number | null;
}

/** Who else is here, in words. */
export function PeopleHere({ people }: { people: readonly PersonHere[] }) {
  return (
    <span role="status" className="text-note">
      {people.length === 0 ? 'Nobody else is here.' : `Here too: ${people.map(nameWords).join(', ')}.`}
    </span>
  );
}

const nameWords = ({ name, frame }: PersonHere): string =>
  frame === null ? name : `${name} at frame ${frame}`;
