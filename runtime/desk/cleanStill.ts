// HTML that came from the page's frame, made safe to show outside of it: elements and attributes of a list, nothing else.
// The frame is trusted with nothing: a notebook's own code may have found a way to speak in its name.

const elements = new Set(("article section header footer main div p span h1 h2 h3 h4 h5 h6 ul ol li dl dt dd blockquote pre code em strong del s sub sup br hr a figure figcaption table caption thead tbody tfoot tr th td " +
  "abbr ins mark img kbd samp var cite q dfn bdi small b i time output label details summary svg g path line rect circle ellipse polyline polygon text tspan defs clippath title desc lineargradient stop symbol use " +
  "math mrow mi mn mo ms mtext mspace mfrac msqrt mroot msub msup msubsup munder mover munderover mtable mtr mtd mstyle mpadded mphantom menclose semantics annotation").split(" "));
const attributes = new Set(("id class title role lang dir start colspan rowspan scope hidden open datetime d x y x1 x2 y1 y2 cx cy r rx ry width height viewbox points transform fill fill-opacity stroke stroke-width stroke-opacity " +
  "stroke-dasharray stroke-linejoin stroke-linecap stroke-miterlimit opacity font-size font-family font-weight font-style text-anchor dominant-baseline dx dy clip-path clip-rule offset stop-color preserveaspectratio " +
  "mathvariant display displaystyle scriptlevel stretchy fence separator form lspace rspace accent accentunder columnalign rowspacing columnspacing linethickness encoding data-from data-to data-state data-kind data-name data-tone style").split(" "));

/** A fragment of the page as it stands, without anything that runs, loads or leads away. */
export function cleanStill(html: string): DocumentFragment {
  const read = new DOMParser().parseFromString(html, "text/html");
  const made = document.createDocumentFragment();
  made.append(...[...read.body.childNodes].flatMap(clean));
  return made;
}

function clean(node: Node): Node[] {
  if (node.nodeType === Node.TEXT_NODE) return [document.createTextNode(node.textContent ?? "")];
  if (!(node instanceof Element) || !elements.has(node.localName.toLowerCase())) return [];
  const made = document.createElementNS(node.namespaceURI, node.localName);
  for (const { name, value } of node.attributes) {
    const plain = name.toLowerCase();
    if ((attributes.has(plain) || plain.startsWith("aria-")) && !leads(plain, value)) made.setAttribute(name, value);
    if (plain === "src" && node.localName === "img" && value.startsWith("data:image/")) made.setAttribute(name, value);
    if (plain === "alt") made.setAttribute(name, value);
    if (plain === "href" && (value.startsWith("#") || (node.localName === "a" && /^(https?|mailto):/i.test(value)))) made.setAttribute(name, value);
  }
  made.append(...[...node.childNodes].flatMap(clean));
  return [made];
}

/** A value that would load something: only places within the page may be pointed at. */
function leads(name: string, value: string): boolean {
  return /url\(\s*(?!["']?#)/i.test(value) || (name === "style" && /@import|expression/i.test(value));
}
