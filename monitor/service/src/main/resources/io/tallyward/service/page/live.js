// Fetches the page again from time to time and puts its contents in place. When that fails, the page says so: numbers
// that stand still must not look alive.
"use strict";

(() => {
  const EVERY_MILLIS = 15000;
  const PATIENCE_MILLIS = 10000;

  const refresh = async () => {
    const answer = await fetch(location.href, { cache: "no-store", signal: AbortSignal.timeout(PATIENCE_MILLIS) });
    if (!answer.ok) {
      throw new Error("status " + answer.status);
    }
    const fresh = new DOMParser().parseFromString(await answer.text(), "text/html");
    const folded = [...document.querySelectorAll("details[open]")].map((details) => details.id);
    folded.forEach((id) => fresh.getElementById(id)?.setAttribute("open", ""));
    const contents = fresh.getElementById("main");
    if (contents.innerHTML !== document.getElementById("main").innerHTML) {
      document.getElementById("main").replaceWith(document.adoptNode(contents));
    }
    document.getElementById("now").textContent = fresh.getElementById("now").textContent;
    document.title = fresh.title;
  };

  const tick = async () => {
    const stale = document.getElementById("stale");
    try {
      await refresh();
      stale.hidden = true;
    } catch (failure) {
      stale.textContent =
        "The monitor does not answer (" + failure.message + "). What is shown is old: " +
        document.getElementById("now").textContent + ".";
      stale.hidden = false;
    }
    setTimeout(tick, EVERY_MILLIS);
  };

  setTimeout(tick, EVERY_MILLIS);
})();
