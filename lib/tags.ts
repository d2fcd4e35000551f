/** Tags as typed in one field, parted by commas; empty and repeated ones are left out. */
export function splitTags(text: string): string[] {
  const tags = text.split(',').map((tag) => tag.trim());
  return [...new Set(tags.filter((tag) => tag !== ''))];
}
