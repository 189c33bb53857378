// When to draw: at the next animation frame, or by a timer in a hidden tab, where no frames come.

export function nextFrame(callback) {
  let done = false;
  const once = () => { if (!done) { done = true; clearTimeout(timer); callback(); } };
  const timer = setTimeout(once, 120);
  requestAnimationFrame(once);
}

// focusSoon moves the focus after the program has let go of the page.
export function focusSoon(id, select) {
  setTimeout(() => {
    const el = document.getElementById(id);
    el?.focus();
    if (select) el?.select?.();
  });
}

// reveal brings an element into view sideways inside the row that scrolls it.
export function reveal(id) {
  const el = document.getElementById(id);
  const row = el?.closest(".chain, .temps ul");
  if (!row || row.scrollWidth <= row.clientWidth) return;
  const a = el.getBoundingClientRect(), b = row.getBoundingClientRect();
  if (a.left < b.left || a.right > b.right) row.scrollLeft += a.left - b.left - (b.width - a.width) / 2;
}
