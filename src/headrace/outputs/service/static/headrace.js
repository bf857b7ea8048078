// Comfort only: every page works without this file.
(function () {
  "use strict";

  // Ctrl+Enter runs the query or sends the scenario.
  document.querySelectorAll("textarea").forEach(function (area) {
    area.addEventListener("keydown", function (event) {
      if (event.key === "Enter" && (event.ctrlKey || event.metaKey)) {
        event.preventDefault();
        area.form.requestSubmit(area.form.querySelector("#run") || undefined);
      }
    });
  });

  // While a query runs, its button says so.
  document.querySelectorAll("form[method=post]").forEach(function (form) {
    form.addEventListener("submit", function (event) {
      var button = event.submitter;
      if (button && (button.value === "html" || !button.value)) {
        button.setAttribute("aria-busy", "true");
        button.textContent = "Working ...";
      }
    });
  });

  // Headings of tables sort their rows.
  function cellValue(row, at) {
    var text = row.cells[at].textContent.trim();
    var number = Number(text);
    return text !== "" && !Number.isNaN(number) ? number : text.toLowerCase();
  }
  document.querySelectorAll("table").forEach(function (table) {
    var body = table.tBodies[0];
    if (!body || body.rows.length < 2) { return; }
    Array.from(table.tHead.rows[0].cells).forEach(function (head, at) {
      var button = document.createElement("button");
      button.type = "button";
      button.textContent = head.textContent;
      head.textContent = "";
      head.appendChild(button);
      button.addEventListener("click", function () {
        var down = head.getAttribute("aria-sort") === "ascending";
        Array.from(table.tHead.rows[0].cells).forEach(function (other) { other.removeAttribute("aria-sort"); });
        head.setAttribute("aria-sort", down ? "descending" : "ascending");
        Array.from(body.rows)
          .map(function (row) { return [cellValue(row, at), row]; })
          .sort(function (a, b) {
            var order = typeof a[0] === typeof b[0] ? (a[0] < b[0] ? -1 : a[0] > b[0] ? 1 : 0) : typeof a[0] === "number" ? -1 : 1;
            return down ? -order : order;
          })
          .forEach(function (pair) { body.appendChild(pair[1]); });
      });
    });
  });
})();
