/** By which the proxy tells a page its own address, so that it can be opened again later. */
export const PATH_HEADER = 'x-beadline-path';
