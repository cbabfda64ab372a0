// Dom: the few functions that everything on the page is built with. Attributes and
// texts are written only when they change, so that a redraw costs what changed.

const SVG = 'http://www.w3.org/2000/svg';

/** @type {WeakMap<Element, Record<string, string | null>>} */
const written = new WeakMap();

/**
 * Sets an attribute unless it has that value already; null, false and undefined
 * take it away, true sets it empty.
 * @param {Element} element
 * @param {string} name
 * @param {string | number | boolean | null | undefined} value
 */
export function set(element, name, value) {
  const text = value === null || value === undefined || value === false ? null : value === true ? '' : String(value);
  let known = written.get(element);
  if (!known) written.set(element, (known = {}));
  if (known[name] === text) return;
  known[name] = text;
  if (text === null) element.removeAttribute(name);
  else element.setAttribute(name, text);
}

/** @type {WeakMap<Element, Record<string, string>>} */
const varied = new WeakMap();

/**
 * Sets a property of the element's own style unless it has that value already. It
 * goes through the style object, which a page may use that allows no style
 * attributes.
 * @param {HTMLElement} element
 * @param {string} property
 * @param {string} value
 */
export function vary(element, property, value) {
  let known = varied.get(element);
  if (!known) varied.set(element, (known = {}));
  if (known[property] === value) return;
  known[property] = value;
  element.style.setProperty(property, value);
}

/** @type {WeakMap<Element, string>} */
const texts = new WeakMap();

/**
 * @param {Element} element
 * @param {string} value
 */
export function say(element, value) {
  if (texts.get(element) === value) return;
  texts.set(element, value);
  element.textContent = value;
}

/**
 * @template {keyof SVGElementTagNameMap} T
 * @param {T} tag
 * @param {Record<string, string | number | boolean>} [attributes]
 * @param {...Node} children
 * @returns {SVGElementTagNameMap[T]}
 */
export function svg(tag, attributes = {}, ...children) {
  const element = /** @type {SVGElementTagNameMap[T]} */ (document.createElementNS(SVG, tag));
  for (const [name, value] of Object.entries(attributes)) set(element, name, value);
  element.append(...children);
  return element;
}

/**
 * @template {keyof HTMLElementTagNameMap} T
 * @param {T} tag
 * @param {Record<string, string | number | boolean>} [attributes]
 * @param {...(Node | string)} children
 * @returns {HTMLElementTagNameMap[T]}
 */
export function html(tag, attributes = {}, ...children) {
  const element = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) set(element, name, value);
  element.append(...children);
  return element;
}

/**
 * The element with this id, which the page is known to have.
 * @template {Element} E
 * @param {string} id
 * @param {new (...args: any[]) => E} type
 * @returns {E}
 */
export function byId(id, type) {
  const element = document.getElementById(id);
  if (!(element instanceof type)) throw new Error(`the page has no ${type.name} #${id}`);
  return element;
}
