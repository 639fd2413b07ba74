// Before the first paint: the scheme the person chose, else the system's.
(() => {
  const chosen = localStorage.getItem('tl.scheme');
  if (chosen === 'light' || chosen === 'dark') document.documentElement.dataset.scheme = chosen;
})();
