"""What is asked of a page on behalf of people who do not see or steer as most do: scripts run inside the page."""

from __future__ import annotations

__all__ = ["CONTRAST", "NAMED_ROLES", "REFERENCES", "REPEATED_IDS", "TARGETS", "VISIBLE_RING"]

#: Roles of the accessibility tree whose name a screen reader speaks (WAI-ARIA 1.2: name required).
NAMED_ROLES = frozenset(
    {
        "application",
        "button",
        "checkbox",
        "combobox",
        "ComboBoxSelect",
        "columnheader",
        "link",
        "listbox",
        "option",
        "searchbox",
        "slider",
        "spinbutton",
        "tab",
        "tabpanel",
        "textbox",
        "tree",
        "treeitem",
        "toolbar",
        "dialog",
        "region",
    }
)

#: Ids that stand more than once.
REPEATED_IDS = """(() => {
  const ids = [...document.querySelectorAll('[id]')].map(({ id }) => id);
  return ids.filter((id, at) => ids.indexOf(id) !== at);
})()"""

#: References between elements that lead nowhere, and labels that label nothing.
REFERENCES = """(() => {
  const lost = [];
  for (const name of ['aria-controls', 'aria-labelledby', 'aria-describedby', 'aria-activedescendant', 'for']) {
    for (const each of document.querySelectorAll(`[${name}]`)) {
      for (const id of each.getAttribute(name).split(/\\s+/)) {
        if (!document.getElementById(id)) lost.push(`${name}=${id}`);
      }
    }
  }
  for (const label of document.querySelectorAll('label')) if (!label.control) lost.push(label.outerHTML);
  return lost;
})()"""

#: All that a user may act on and that is shown: what Tab must reach. Of a tree, a row of tabs and a list one
#: member stands for all, and its keys lead on (WAI-ARIA authoring practices: roving tabindex).
TARGETS = """[...document.querySelectorAll('button, select, input, [tabindex="0"], a[href]')].filter((each) =>
  each.tabIndex >= 0 && !each.disabled && each.checkVisibility({ visibilityProperty: true }))"""

#: Whether the element that has the focus shows that it has it.
VISIBLE_RING = """(() => {
  const style = getComputedStyle(document.activeElement);
  return parseFloat(style.outlineWidth) >= 1.5 && style.outlineStyle !== 'none' || style.boxShadow !== 'none';
})()"""

#: For all text that is shown: its words and its contrast with its ground, after WCAG 2.2 (relative luminance).
#: Controls that are disabled are left out, as there. Text over the model counts the paper as its ground.
CONTRAST = """(() => {
  const luminance = (rgb) => {
    const [r, g, b] = rgb.map((value) => value / 255).map((value) =>
      value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4);
    return 0.2126 * r + 0.7152 * g + 0.0722 * b;
  };
  const parsed = (text) => {
    const [r, g, b, a = 1] = text.match(/[\\d.]+/g).map(Number);
    return { rgb: [r, g, b], a };
  };
  const over = (top, share, ground) => top.map((value, at) => share * value + (1 - share) * ground[at]);
  const groundOf = (element) => {
    if (!element) return [255, 255, 255];
    const { rgb, a } = parsed(getComputedStyle(element).backgroundColor);
    return a === 1 ? rgb : over(rgb, a, groundOf(element.parentElement));
  };
  const found = [];
  const walker = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
  while (walker.nextNode()) {
    const element = walker.currentNode.parentElement;
    const words = walker.currentNode.textContent.trim();
    if (!words || element.closest('script, style, noscript, :disabled')) continue;
    if (!element.checkVisibility({ visibilityProperty: true, opacityProperty: true })) continue;
    let share = 1;
    for (let each = element; each; each = each.parentElement) share *= Number(getComputedStyle(each).opacity);
    const ground = groundOf(element);
    const { rgb, a } = parsed(getComputedStyle(element).color);
    const [light, dark] = [luminance(over(rgb, a * share, ground)), luminance(ground)].sort((p, q) => q - p);
    const ratio = (light + 0.05) / (dark + 0.05);
    found.push({ words: words.slice(0, 40), ratio, inside: element.outerHTML.slice(0, 120) });
  }
  return found;
})()"""
