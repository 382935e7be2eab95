"use strict";
// The print button of the memo; without script the browser's own menu prints the same page.
document.addEventListener("DOMContentLoaded", () => {
  const button = document.getElementById("print");
  button.hidden = false;
  button.addEventListener("click", () => print());
});
