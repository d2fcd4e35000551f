/** What checking a stack adds to its folder, beside the files that were sent. */
export const PREVIEWS_AND_INDEX = /^(index\.bin|strip\.png|preview-\d+\.webp)$/;
