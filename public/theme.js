// Runs before the first paint, so that nobody sees the wrong theme flash by. A file of its own and not an inline
// script, because the page's security policy allows the program's own files only. The keys are those of
// src/components/look-settings.ts.
(function () {
  var root = document.documentElement;
  var fallback = document.currentScript && document.currentScript.dataset.defaultTheme;
  function read(key) {
    try {
      return localStorage.getItem(key);
    } catch (error) {
      // Storage may be barred; the system's wish then decides.
      return null;
    }
  }
  if (fallback) root.dataset.defaultTheme = fallback;
  var theme = read('witnessmark.theme') || fallback;
  if (theme) root.dataset.theme = theme;
  ['text', 'hand', 'motion'].forEach(function (key) {
    var value = read('witnessmark.' + key);
    if (value) root.dataset[key] = value;
  });
})();
