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
