// What a person would stumble over on a page, measured in the browser as lists of sentences.
(() => {
  const SLACK = 1; // px: letters may reach over their boxes by so much

  const shown = (node) => {
    const range = document.createRange();
    range.selectNodeContents(node);
    return [...range.getClientRects()].filter((box) => box.width > 0 && box.height > 0);
  };

  const texts = () => {
    const walker = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
    const found = [];
    for (let node = walker.nextNode(); node; node = walker.nextNode()) {
      const element = node.parentElement;
      if (!node.data.trim() || !element.checkVisibility({ visibilityProperty: true })) continue;
      const words = node.data.trim().slice(0, 40);
      for (const box of shown(node)) found.push({ element, words, box });
    }
    return found;
  };

  const scroller = (element) => {
    for (let at = element; at; at = at.parentElement) {
      const scrolls = ["auto", "scroll"].includes(getComputedStyle(at).overflowX);
      if (scrolls && at.scrollWidth > at.clientWidth) return at;
    }
    return null;
  };

  const beyond = (box, room) =>
    box.left < room.left - SLACK || box.right > room.right + SLACK;

  // Text that cannot be brought into view by scrolling downwards, or inside its own region.
  const outside = (all) => {
    const page = { left: 0, right: document.documentElement.clientWidth };
    return all
      .filter(({ element, box }) => !scroller(element) && beyond(box, page))
      .map(({ words }) => `beyond the page: ${words}`);
  };

  const clipped = (all) =>
    all.flatMap(({ element, words, box }) => {
      for (let at = element; at && at !== document.documentElement; at = at.parentElement) {
        const cuts = ["hidden", "clip"].includes(getComputedStyle(at).overflowX);
        const whole = at instanceof SVGElement && !(at instanceof SVGSVGElement);
        if (!cuts || whole) continue;
        const room = at.getBoundingClientRect();
        const low = box.top < room.top - 3 || box.bottom > room.bottom + 3;
        if (low || beyond(box, room)) return [`cut off: ${words}`];
      }
      return [];
    });

  // Boxes of lines hold room above and below the letters, which may overlap.
  const core = ({ left, right, top, bottom }) => {
    const inset = 0.22 * (bottom - top);
    return { left: left + SLACK, right: right - SLACK, top: top + inset, bottom: bottom - inset };
  };

  const overlapping = (texts) => {
    const all = texts
      .map((text) => ({ ...text, core: core(text.box) }))
      .sort((one, other) => one.core.top - other.core.top);
    const found = [];
    all.forEach((one, place) => {
      for (const other of all.slice(place + 1)) {
        if (other.core.top >= one.core.bottom) break;
        if (other.core.left < one.core.right && one.core.left < other.core.right)
          found.push(`one upon the other: ${one.words} / ${other.words}`);
      }
    });
    return found;
  };

  const wide = () => {
    const root = document.documentElement;
    const excess = root.scrollWidth - root.clientWidth;
    return excess > 0 ? [`the page is wider than its window: ${excess} px too many`] : [];
  };

  // Regions that scroll are reached by the keyboard and have a name.
  const regions = () =>
    [...document.querySelectorAll("*")]
      .filter((one) => scroller(one) === one && one !== document.documentElement)
      .filter((one) => one.tabIndex !== 0 || !one.getAttribute("aria-label"))
      .map((one) => `scrolls without a name or the keyboard: ${one.className}`);

  const reachable = () =>
    [...document.querySelectorAll("a[href], button, input, select, summary, [tabindex='0']")].filter(
      (one) => !one.disabled && one.checkVisibility({ visibilityProperty: true }),
    );

  const focused = () => {
    const one = document.activeElement;
    if (!one || one === document.body) return null;
    const style = getComputedStyle(one);
    const box = one.getBoundingClientRect();
    return {
      place: reachable().indexOf(one),
      ring: style.outlineStyle === "none" ? 0 : parseFloat(style.outlineWidth),
      colour: style.outlineColor,
      inView: box.bottom > 0 && box.top < innerHeight && box.right > 0 && box.left < innerWidth,
    };
  };

  const problems = () => {
    const all = texts();
    return [...wide(), ...outside(all), ...clipped(all), ...overlapping(all), ...regions()];
  };

  // The keyboard begins anew; how many stops there are.
  const fromTheTop = () => {
    document.body.tabIndex = -1;
    document.body.focus();
    document.body.removeAttribute("tabindex");
    scrollTo(0, 0);
    return reachable().length;
  };

  // Contrast as WCAG 2.2 defines it; nothing lies upon anything else, so a ground is an ancestor's.
  const channels = (colour) => colour.match(/[\d.]+/g).map(Number);

  const luminance = (colour) => {
    const [red, green, blue] = channels(colour)
      .slice(0, 3)
      .map((value) => value / 255)
      .map((value) => (value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4));
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue;
  };

  const ground = (element) => {
    for (let at = element; at; at = at.parentElement) {
      const colour = getComputedStyle(at).backgroundColor;
      if ((channels(colour)[3] ?? 1) === 1) return colour;
    }
    return "rgb(255, 255, 255)";
  };

  const contrast = (element) => {
    const style = getComputedStyle(element);
    const colour = element instanceof SVGElement ? style.fill : style.color;
    const pair = [luminance(colour), luminance(ground(element))].sort((a, b) => b - a);
    return (pair[0] + 0.05) / (pair[1] + 0.05);
  };

  const faint = () =>
    texts()
      .filter(({ element }) => contrast(element) < 4.5)
      .map(({ element, words }) => `${contrast(element).toFixed(1)} to 1: ${words}`);

  return { problems, faint, reachable, fromTheTop, focused };
})();
