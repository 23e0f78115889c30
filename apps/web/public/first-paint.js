// Runs before the first paint, so that a page in the dark never flashes in the light. A file of its own, because the
// content security policy allows no script inside the page.
(function () {
  try {
    var choice = localStorage.getItem('palmette.appearance');
    if (choice === 'light' || choice === 'dark') document.documentElement.dataset.appearance = choice;
  } catch {
    // Storage can be switched off; then the system's choice holds.
  }
})();
