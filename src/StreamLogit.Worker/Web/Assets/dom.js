// Makes elements. Text from the stream only ever becomes text.

const svgNamespace = "http://www.w3.org/2000/svg";

function fill(element, attributes, children) {
  for (const [name, value] of Object.entries(attributes)) {
    if (value === true) element.setAttribute(name, "");
    else if (value !== false && value !== null && value !== undefined) element.setAttribute(name, value);
  }
  element.append(...children.filter((child) => child !== null && child !== undefined));
  return element;
}

export const el = (name, attributes = {}, ...children) => fill(document.createElement(name), attributes, children);

export const svg = (name, attributes = {}, ...children) => fill(document.createElementNS(svgNamespace, name), attributes, children);

// Sets text only where it differs, so that nothing is repainted, selected text stays selected, and nothing is read out again.
export function setText(element, text) {
  if (element.textContent !== text) element.textContent = text;
}
