/** Hands a text to the browser as a file. Browser only. */
export function saveText(text: string, name: string, type: string): void {
  const url = URL.createObjectURL(new Blob([text], { type }));
  const link = document.createElement('a');
  link.href = url;
  link.download = name;
  link.click();
  URL.revokeObjectURL(url);
}

/**
 * A drawing as a file of its own: on paper's colours whatever the theme, with the fonts by name.
 * Browser only: colours are read from the page's tokens.
 */
export function svgFileText(svg: SVGSVGElement): string {
  const copy = svg.cloneNode(true) as SVGSVGElement;
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg');
  copy.setAttribute('font-family', "'Source Sans 3', sans-serif");
  copy.removeAttribute('class');
  copy.removeAttribute('style');
  const paper = document.createElement('div');
  paper.dataset.theme = 'light';
  paper.hidden = true;
  document.body.append(paper);
  const tokens = getComputedStyle(paper);
  const text = new XMLSerializer()
    .serializeToString(copy)
    .replaceAll('var(--serif)', "'STIX Two Text', serif")
    .replace(/var\(--([\w-]+)\)/g, (_, name: string) => tokens.getPropertyValue(`--${name}`).trim());
  paper.remove();
  return text;
}
