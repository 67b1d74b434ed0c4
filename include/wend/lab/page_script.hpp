// wend/lab/page_script.hpp - what moves on the review page: which policy and run is shown, and where along it.
#pragma once

namespace wend::inline v0::lab::detail {

// Without it the page shows everything, still. It reads the page's own data and changes attributes; it builds no markup
// from text.
inline constexpr char const* page_script = R"js(
(() => {
  "use strict";
  const policies = JSON.parse(document.getElementById("runs").textContent);
  const sections = [...document.querySelectorAll("section.policy")];
  document.documentElement.classList.add("scripted");

  const at = (steps, place) => {  // steps: [first place, value], in order; the last one that has begun
    let value = steps[0][1];
    for (const [first, next] of steps) {
      if (first > place) break;
      value = next;
    }
    return value;
  };

  const views = sections.map((section, number) => {
    const runs = policies[number].runs;
    const pick = section.querySelector("select");
    const slider = section.querySelector("input[type=range]");
    const output = section.querySelector("output");
    const play = section.querySelector("button.play");
    const map = section.querySelector("svg.map");
    const robot = map.querySelector(".robot");
    const scale = Number(map.dataset.scale);
    const px = (x) => Number(map.dataset.x) + x * scale;
    const py = (y) => Number(map.dataset.y) - y * scale;
    let timer = 0;

    const stop = () => {
      clearInterval(timer);
      timer = 0;
      play.textContent = "Play";
    };
    const place = () => {
      const run = runs[pick.selectedIndex];
      const k = Math.min(Number(slider.value), run.t.length - 1);
      const turn = (-run.heading[k] * 180) / Math.PI;
      robot.setAttribute("transform", `translate(${px(run.x[k])} ${py(run.y[k])}) rotate(${turn})`);
      for (const mover of map.querySelectorAll(".mover")) {
        const by = run.t[k] * scale;
        mover.setAttribute("transform", `translate(${mover.dataset.vx * by} ${-mover.dataset.vy * by})`);
      }
      const chart = section.querySelector(`.chart-of[data-run="${pick.selectedIndex}"] svg`);
      const cursor = chart.querySelector(".cursor");
      const x0 = Number(chart.dataset.x0);
      const x = x0 + ((Number(chart.dataset.x1) - x0) * Math.min(run.t[k], chart.dataset.end)) / chart.dataset.end;
      cursor.setAttribute("x1", x);
      cursor.setAttribute("x2", x);
      const modes = at(run.modes, k);
      const clear = run.clearance[k];
      const told = [`${run.t[k].toFixed(2)} s`, clear === null ? "nothing near" : `clearance ${clear.toFixed(2)} m`,
                    `${run.speed[k].toFixed(2)} m/s`, `status ${at(run.status, k)}`];
      policies[number].switches.forEach((name, i, all) => {
        told.push(`${name}: ${(modes >> (all.length - 1 - i)) & 1 ? "inside" : "outside"}`);
      });
      output.textContent = told.join(" · ");
      slider.setAttribute("aria-valuetext", told.join(", "));
    };
    const show = (run) => {
      stop();
      pick.selectedIndex = run;
      slider.max = runs[run].t.length - 1;
      slider.value = 0;
      for (const part of section.querySelectorAll("[data-run]")) {
        part.toggleAttribute("hidden", Number(part.dataset.run) !== run);
        if (part instanceof SVGElement) part.style.display = Number(part.dataset.run) === run ? "" : "none";
      }
      place();
    };
    pick.addEventListener("change", () => show(pick.selectedIndex));
    slider.addEventListener("input", () => { stop(); place(); });
    play.addEventListener("click", () => {
      if (timer) return stop();
      const run = runs[pick.selectedIndex];
      if (Number(slider.value) >= run.t.length - 1) slider.value = 0;
      play.textContent = "Pause";
      const start = performance.now() - 250 * run.t[Number(slider.value)];  // four times as fast as it was
      timer = setInterval(() => {
        const now = (performance.now() - start) / 250;
        let k = Number(slider.value);
        while (k < run.t.length - 1 && run.t[k] < now) ++k;
        slider.value = k;
        place();
        if (k >= run.t.length - 1) stop();
      }, 40);
    });
    show(0);
    return { section, show };
  });

  const choices = [...document.querySelectorAll("input[name=policy]")];
  const choose = (number) => {
    choices[number].checked = true;
    views.forEach(({ section }, i) => { section.hidden = i !== number; });
  };
  choices.forEach((choice, i) => choice.addEventListener("change", () => choose(i)));
  choose(Math.max(0, choices.findIndex((choice) => choice.checked)));
  for (const button of document.querySelectorAll("button.show")) {
    button.addEventListener("click", () => {
      const number = Number(button.dataset.policy);
      choose(number);
      views[number].show(Number(button.dataset.shows));
      views[number].section.scrollIntoView();
      views[number].section.querySelector("input[type=range]").focus({ preventScroll: true });
    });
  }
})();
)js";

}  // namespace wend::inline v0::lab::detail
