"use strict";
(() => {
  const form = document.getElementById("filter");
  const part = (name) => document.getElementById(`f-${name}`);
  const [name, method, flag, size] = ["name", "method", "flag", "size"].map(part);
  const rows = [...document.querySelectorAll("#rows tr")].map((row) => ({
    row,
    well: document.getElementById(row.dataset.w),
    name: row.cells[0].textContent.toLowerCase(),
    methods: row.dataset.m.split(" "),
    flags: row.dataset.f.split(" "),
    size: Number(row.dataset.z),
  }));
  const apply = () => {
    const text = name.value.trim().toLowerCase();
    const least = Number(size.value) || 0;
    let seen = 0;
    for (const one of rows) {
      const keep =
        one.name.includes(text) &&
        (!method.value || one.methods.includes(method.value)) &&
        (!flag.value || one.flags.includes(flag.value)) &&
        one.size >= least;
      for (const element of [one.row, one.well]) {
        if (element) element.toggleAttribute("data-hide", !keep);
      }
      seen += keep;
    }
    part("count").textContent = `${seen} of ${rows.length} shown`;
  };
  // wells.html?name=BW-01&size=3 opens with these filters.
  const asked = new URLSearchParams(location.search);
  name.value = asked.get("name") ?? "";
  size.value = asked.get("size") ?? "0";
  form.hidden = false;
  form.addEventListener("input", apply);
  form.addEventListener("submit", (event) => event.preventDefault());
  form.addEventListener("reset", () => setTimeout(apply));
  apply();
})();
