// Keeps the app readable for assistive technology, and gives number fields the right keypad.
(() => {
  "use strict";

  // Flutter draws on a canvas and builds its semantics tree only after a tap in the middle of its placeholder.
  const switchOn = (placeholder) => {
    const box = placeholder.getBoundingClientRect();
    placeholder.dispatchEvent(new MouseEvent("click", {
      bubbles: true, clientX: box.left + box.width / 2, clientY: box.top + box.height / 2,
    }));
  };

  // A field with keyboard_type PHONE arrives as <input type="tel">. That is this app's mark for a number field:
  // text, so that a comma or a point can be typed and no screen reader calls it a telephone, with the decimal keypad.
  const asDecimal = (field) => {
    if (field.type === "tel") {
      field.type = "text";
      field.dataset.keypad = "decimal";
      field.autocomplete = "off";
    }
    // Flutter removes the attribute when the field takes the focus.
    if (field.dataset.keypad === "decimal" && field.inputMode !== "decimal") field.inputMode = "decimal";
  };

  const look = (node) => {
    if (node.nodeType !== Node.ELEMENT_NODE) return;
    if (node.matches("flt-semantics-placeholder")) switchOn(node);
    if (node.matches("input")) asDecimal(node);
    for (const child of node.querySelectorAll("flt-semantics-placeholder")) switchOn(child);
    for (const field of node.querySelectorAll("input[type=tel]")) asDecimal(field);
  };
  new MutationObserver((records) => {
    for (const record of records) {
      if (record.type === "attributes") look(record.target);
      else record.addedNodes.forEach(look);
    }
  }).observe(document, { childList: true, subtree: true, attributes: true, attributeFilter: ["type", "inputmode"] });
  addEventListener("focusin", (event) => look(event.target), true);
})();
