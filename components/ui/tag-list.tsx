import Link from 'next/link';

/** Tags in a quiet line; links where a list can be narrowed by them. */
export function TagList({ tags, href }: { tags: readonly string[]; href?: (tag: string) => string }) {
  if (tags.length === 0) return null;
  return (
    <span className="flex flex-wrap gap-x-2 text-small text-ink-3">
      {tags.map((tag) =>
        href ? (
          <Link
            key={tag}
            href={href(tag)}
            className="text-ink-3 no-underline hover:text-violet-text hover:underline"
          >
            {tag}
          </Link>
        ) : (
          <span key={tag}>{tag}</span>
        ),
      )}
    </span>
  );
}
