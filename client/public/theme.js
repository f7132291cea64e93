/* global document */
/* Before the first paint: the theme that was chosen, so that a dark page never flashes light. A file of its own,
   because inline scripts are not allowed by the page's policy. */
try {
  const { theme } = JSON.parse(localStorage.getItem('spandrel.preferences') ?? '{}')
  if (theme === 'light' || theme === 'dark') document.documentElement.dataset.theme = theme
} catch {
  /* Storage may be closed to us or hold something else; the system's theme is then used. */
}
