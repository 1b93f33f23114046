// While a slip is typed: whose number it is, and what remains. The page does all its work without.
"use strict";
const echo = document.getElementById("echo");
const member = document.getElementById("id_member");
const place = document.getElementById("id_place_1");
const point = document.getElementById("id_draw_point");
let asked = 0;

async function tell() {
  const mine = (asked += 1);
  if (!member.value.trim()) {
    echo.textContent = "";
    return;
  }
  const query = new URLSearchParams({ member: member.value.trim(), place: place.value });
  try {
    const answer = await fetch(`${echo.dataset.left}?${query}`, { credentials: "same-origin" });
    if (!answer.ok || mine !== asked) return;
    const said = await answer.json();
    if (mine !== asked) return;
    const name = document.createElement("bdi");
    name.textContent = said.name;
    echo.replaceChildren(name, said.words ? `: ${said.words}` : "");
    point.placeholder = said.draw_point;
  } catch {
    // Without a network the receipt says it.
  }
}

member.addEventListener("input", tell);
place.addEventListener("change", tell);
tell();
