"use strict";
(() => {
  const viewer = document.getElementById("viewer");
  if (!viewer) return;
  const part = (id) => document.getElementById(id);
  const slider = part("step");
  const buttons = [...viewer.querySelectorAll("[data-reel]")];
  let reel = 0;
  const frames = () => [...part(`reel-${reel}`).children];
  const put = (place, template) => place.replaceChildren(part(template).content.cloneNode(true));

  const show = (step) => {
    const all = frames();
    const at = Math.max(0, Math.min(all.length - 1, step));
    slider.max = all.length - 1;
    slider.value = at;
    slider.setAttribute("aria-valuetext", all[at].textContent);
    put(part("picture"), `picture-${all[at].dataset.picture}`);
    part("step-title").textContent = all[at].textContent;
    part("step-caption").textContent = all[at].dataset.caption;
  };
  const choose = (next) => {
    if (!buttons[next]) return;
    const step = Number(slider.value);
    reel = next;
    buttons.forEach((button, at) => button.setAttribute("aria-pressed", String(at === reel)));
    put(part("legend"), `legend-${reel}`);
    show(step);
  };

  buttons.forEach((button, at) => button.addEventListener("click", () => choose(at)));
  slider.addEventListener("input", () => show(Number(slider.value)));
  part("back").addEventListener("click", () => show(Number(slider.value) - 1));
  part("forward").addEventListener("click", () => show(Number(slider.value) + 1));
  document.addEventListener("keydown", (event) => {
    if (event.ctrlKey || event.metaKey || event.altKey || event.target === slider) return;
    if (event.key === "ArrowLeft") show(Number(slider.value) - 1);
    else if (event.key === "ArrowRight") show(Number(slider.value) + 1);
    else if (/^[1-9]$/.test(event.key)) choose(Number(event.key) - 1);
    else return;
    event.preventDefault();
  });
  slider.max = frames().length - 1;
  slider.value = slider.max;
  choose(0);
})();
