(() => {
  const root = document.documentElement;
  const theme = document.getElementById('theme');
  const dark = () => root.dataset.theme ? root.dataset.theme === 'dark' : matchMedia('(prefers-color-scheme: dark)').matches;
  const label = () => { theme.textContent = dark() ? 'Light' : 'Dark'; };
  theme.addEventListener('click', () => { root.dataset.theme = dark() ? 'light' : 'dark'; label(); });
  matchMedia('(prefers-color-scheme: dark)').addEventListener('change', label);
  document.getElementById('print').addEventListener('click', () => print());
  let closed = [];
  addEventListener('beforeprint', () => {
    closed = [...document.querySelectorAll('details:not([open])')];
    closed.forEach(d => { d.open = true; });
  });
  addEventListener('afterprint', () => { closed.forEach(d => { d.open = false; }); });
  label();
  theme.hidden = false;
  document.getElementById('print').hidden = false;
  document.body.dataset.ready = '1';
})();
