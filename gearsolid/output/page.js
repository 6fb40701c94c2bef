"use strict";
(() => {
  const { parts, ratio, tightest } = JSON.parse(document.getElementById("motions").textContent);
  const groups = parts.map((_, k) => document.querySelector(`#machine [data-part="${k}"]`));
  const play = document.getElementById("play");
  const slider = document.getElementById("angle");
  const text = document.getElementById("angle-text");
  const pace = document.getElementById("pace");
  const still = matchMedia("(prefers-reduced-motion: reduce)");
  const degree = Math.PI / 180;
  let psi = tightest;
  let running = false;
  let seen = true;
  let last = null;

  // The pose of every part follows from the input angle psi [degrees] alone.
  function pose() {
    parts.forEach((m, k) => {
      const polar = (m.centre_angle + m.centre_rate * psi) * degree;
      const x = m.centre_radius * Math.cos(polar);
      const y = m.centre_radius * Math.sin(polar);
      groups[k].setAttribute("transform", `translate(${x} ${y}) rotate(${m.angle + m.rate * psi})`);
    });
    const turn = ((psi % 360) + 360) % 360;
    slider.value = turn;
    text.textContent = `Input ${psi.toFixed(1)}°, output ${(psi / ratio).toFixed(2)}°`;
  }

  function frame(now) {
    if (!running) return;
    // At the middle of the pace slider the input makes a turn in twelve seconds; each step of one is a factor of four.
    if (last !== null && seen) psi += ((now - last) / 1000) * 30 * 4 ** Number(pace.value);
    last = now;
    pose();
    requestAnimationFrame(frame);
  }

  function run(on) {
    running = on;
    last = null;
    play.textContent = on ? "Pause" : "Start";
    play.setAttribute("aria-pressed", String(on));
    if (on) requestAnimationFrame(frame);
  }

  play.addEventListener("click", () => run(!running));
  slider.addEventListener("input", () => {
    run(false);
    psi = Math.floor(psi / 360) * 360 + Number(slider.value);
    pose();
  });
  document.getElementById("tightest").addEventListener("click", () => {
    run(false);
    psi = tightest;
    pose();
  });
  new IntersectionObserver(([entry]) => { seen = entry.isIntersecting; last = null; }).observe(document.getElementById("machine"));
  still.addEventListener("change", () => { if (still.matches) run(false); });
  document.querySelector(".controls").hidden = false;
  pose();
  run(!still.matches);
})();
