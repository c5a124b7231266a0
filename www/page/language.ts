/**
 * A system without a language ("C") makes navigator.language something that Intl refuses, and the plot library asks
 * Intl while it loads. This comes first and gives it English instead; the page's own numbers do not depend on it.
 */
try {
  Intl.getCanonicalLocales(navigator.language);
} catch {
  Object.defineProperty(navigator, "language", { value: "en", configurable: true });
}
