/* global SwaggerUIBundle */
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
