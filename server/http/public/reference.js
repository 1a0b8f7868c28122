/* global SwaggerUIBundle */
const dark = matchMedia('(prefers-color-scheme: dark)');
const follow = () => document.documentElement.classList.toggle('dark-mode', dark.matches);
dark.addEventListener('change', follow);
follow();
SwaggerUIBundle({
  url: '/openapi.yaml',
  dom_id: '#reference',
  // Nothing is sent to an outside checker, no key is kept, and large answers are not coloured.
  validatorUrl: null,
  persistAuthorization: false,
  syntaxHighlight: false,
  deepLinking: true,
  defaultModelsExpandDepth: 0,
});
