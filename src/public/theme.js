// Runs before the first paint, as a file of its own because the content security policy allows no inline script.
// The same key as in src/lib/theme.ts; without a stored choice the system's scheme holds.
try {
  const theme = localStorage.getItem('ogee.theme')
  if (theme === '"light"') document.documentElement.dataset.theme = 'light'
  if (theme === '"dark"') document.documentElement.dataset.theme = 'dark'
} catch {
  // Storage may be shut; the system's scheme holds.
}
