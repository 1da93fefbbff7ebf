"use strict";
(() => {
  const viewer = document.getElementById("viewer");
  if (!viewer) return;
  const part = (id) => document.getElementById(id);
  const slider = part("step");
  const sites = [...viewer.querySelectorAll("[data-reel]")];
  let reel = 0;
  let steps = [];
  const frames = () => [...part(`reel-${reel}`).children];
  const put = (place, template) => place.replaceChildren(part(template).content.cloneNode(true));

  const show = (wanted) => {
    const all = frames();
    const at = Math.max(0, Math.min(all.length - 1, wanted));
    const frame = all[at];
    slider.max = all.length - 1;
    slider.value = at;
    slider.setAttribute("aria-valuetext", frame.textContent);
    put(part("picture"), `picture-${frame.dataset.picture}`);
    part("step-title").textContent = frame.textContent;
    part("step-caption").textContent = frame.dataset.caption;
    part("step-notes").textContent = frame.dataset.notes;
    part("back").disabled = at === 0;
    part("forward").disabled = at === all.length - 1;
    steps.forEach((step, index) => {
      if (index === at) step.setAttribute("aria-current", "step");
      else step.removeAttribute("aria-current");
    });
  };
  const choose = (next, step) => {
    if (!sites[next]) return;
    reel = next;
    sites.forEach((site, at) => site.setAttribute("aria-pressed", String(at === reel)));
    put(part("legend"), `legend-${reel}`);
    steps = frames().map((frame, at) => {
      const button = document.createElement("button");
      button.type = "button";
      button.textContent = frame.textContent;
      button.addEventListener("click", () => show(at));
      return button;
    });
    part("steps").replaceChildren(...steps.map((button) => {
      const item = document.createElement("li");
      item.append(button);
      return item;
    }));
    show(step);
  };
  const here = () => Number(slider.value);

  sites.forEach((site, at) => site.addEventListener("click", () => choose(at, here())));
  slider.addEventListener("input", () => show(here()));
  part("back").addEventListener("click", () => show(here() - 1));
  part("forward").addEventListener("click", () => show(here() + 1));
  const keys = {
    ArrowLeft: () => show(here() - 1),
    ArrowRight: () => show(here() + 1),
    ArrowUp: () => choose(reel - 1, here()),
    ArrowDown: () => choose(reel + 1, here()),
  };
  // Arrows belong to the viewer while it is in sight or focused; elsewhere they scroll.
  document.addEventListener("keydown", (event) => {
    const key = keys[event.key];
    const held = event.ctrlKey || event.metaKey || event.altKey || event.shiftKey;
    const focus = document.activeElement;
    const ours = focus === document.body ? event.key.match(/Left|Right/) : viewer.contains(focus);
    if (!key || held || !ours || event.target === slider) return;
    key();
    event.preventDefault();
  });
  choose(0, frames().length - 1);
})();
